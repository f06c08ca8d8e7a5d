#include "clickwise/logs/text_log.hpp"

#include <fmt/format.h>

#include <catch2/catch.hpp>
#include <cmath>
#include <fstream>
#include <iterator>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "support/log_file.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using run::FaultKind;
using run::Recording;

namespace {

const bike::ColumnRef by_name(const std::string& name) {
  return {name, 0};
}
bike::ColumnRef by_number(int number) {
  return {"", number};
}

bike::LogFormat timed(const bike::ColumnRef& column, double seconds_per_unit) {
  bike::LogFormat format;
  format.time = bike::TimeColumn{column, seconds_per_unit};
  return format;
}

bike::LogFormat rated(double rate_hz) {
  bike::LogFormat format;
  format.rate_hz = rate_hz;
  return format;
}

Recording read(const std::string& text, const bike::LogFormat& format,
               const std::vector<bike::ColumnRef>& columns, std::size_t chunk = 0) {
  return logs::read_text_log(test::LogFile(text).path(), format, columns, {chunk});
}

// "kind/channel count seconds_in_ms" per fault.
std::string faults_of(const Recording& recording) {
  std::string text;
  for (const run::Fault& fault : recording.faults.faults())
    text += fmt::format("{}/{} {} {:.3g};", run::to_string(fault.kind), fault.channel, fault.count,
                        1e3 * fault.seconds);
  return text;
}

const std::vector<double>& readings(const Recording& recording, std::size_t channel = 0) {
  return recording.channels.at(channel).readings;
}

// Rows "t,a" at 1 ms in us, a = 100 + row.
std::string rows(int begin, int end, int offset_us = 0) {
  std::string text;
  for (int i = begin; i < end; ++i) text += fmt::format("{},{}\n", 1000 * i + offset_us, 100 + i);
  return text;
}

constexpr double us = 1e-6;

}  // namespace

TEST_CASE("one log written in many ways reads the same", "[text_log]") {
  const std::string variants[] = {
      "t_s,fork,rear\n0.0,10.5,1\n0.5,11.5,2\n1.0,12.5,3\n1.5,13.5,4\n",
      "t_s;fork;rear\r\n0,0;10,5;1\r\n0,5;11,5;2\r\n1,0;12,5;3\r\n1,5;13,5;4\r\n",
      "\xEF\xBB\xBFt_s\tfork\trear\n0.0\t10.5\t1\n0.5\t11.5\t2\n1.0\t12.5\t3\n1.5\t13.5\t4",
      "  t_s  fork rear\n  0.0  10.5   1\n  0.5  11.5   2\n 1.0 12.5 3\n 1.5 13.5 4\n",
      "\"t_s\",\"fork\",\"rear\"\n\"0.0\",\"10.5\",\"1\"\n0.5,11.5,2\n\"1.0\",12.5,3\n1.5,13.5,4\n",
      "# made by hand\nt_s, fork, rear\n0.0, 10.5, 1\n# note\n0.5, 11.5, 2\n\n1.0, 12.5, 3\n1.5, "
      "13.5, 4\n",
      "# t_s,fork,rear\n0.0,10.5,1\n5e-1,1.15e1,2\n1.0,+12.5,3\n1.5,13.5,4\n",
      "note,t_s,fork,rear\n\"a, "
      "\"\"b\"\"\",0.0,10.5,1\n\"two\nlines\",0.5,11.5,2\n,1.0,12.5,3\nx,1.5,13.5,4\n",
  };
  for (const std::string& text : variants) {
    INFO(text);
    const Recording recording =
        read(text, timed(by_name("t_s"), 1.0), {by_name("rear"), by_name("fork")});
    CHECK(recording.t_s == std::vector<double>{0.0, 0.5, 1.0, 1.5});
    CHECK(readings(recording, 0) == std::vector<double>{1, 2, 3, 4});
    CHECK(readings(recording, 1) == std::vector<double>{10.5, 11.5, 12.5, 13.5});
    CHECK(recording.channels[1].name == "fork");
    CHECK(recording.interval_s == 0.5);
    CHECK(recording.faults.empty());
  }
}

TEST_CASE("a log without header is read by numbers", "[text_log]") {
  const Recording recording = read(rows(0, 10), timed(by_number(1), us), {by_number(2)});
  CHECK(readings(recording).back() == 109.0);
  CHECK(recording.channels[0].name == "2");
}

TEST_CASE("a log without a time column runs at its rate", "[text_log]") {
  const Recording recording = read("a,b\n1,5\n2,6\nbad\n4,8\n5,\n", rated(100.0), {by_name("b")});
  CHECK(recording.t_s.size() == 5);  // the bad row holds its place in time
  CHECK(recording.t_s[4] == 0.04);
  CHECK(std::isnan(readings(recording)[2]));
  CHECK(readings(recording)[3] == 8.0);
  CHECK(faults_of(recording) == "missing/b 1 10;missing/ 1 10;");
  const Recording one_column = read("5\n6\n7\n8\n", rated(100.0), {by_number(1)});
  CHECK(readings(one_column) == std::vector<double>{5, 6, 7, 8});
}

TEST_CASE("dates and times of day are clocks", "[text_log]") {
  const std::string dated =
      "when,a\n2023-10-27T23:59:59.500Z,1\n2023-10-27T23:59:59.750Z,2\n2023-10-28T00:00:00.000Z,3\n"
      "2023-10-28T00:00:00.250Z,4\n";
  const Recording by_date = read(dated, timed(by_name("when"), 1e-3), {by_name("a")});
  CHECK(by_date.t_s == std::vector<double>{0.0, 0.25, 0.5, 0.75});
  CHECK(by_date.faults.empty());
  const std::string daily =
      "when;a\n23:59:59,500;1\n23:59:59,750;2\n00:00:00,000;3\n00:00:00,250;4\n";
  const Recording by_day = read(daily, timed(by_name("when"), 1.0), {by_name("a")});
  CHECK(by_day.t_s == std::vector<double>{0.0, 0.25, 0.5, 0.75});
  CHECK(by_day.faults.empty());
}

TEST_CASE("cells that are no reading are missing and counted by channel", "[text_log]") {
  std::string text = "t,a\n" + rows(0, 10);
  for (const char* cell : {"", " ", "nan", "inf", "-inf", "1e308", "1e999", "abc", "--", "12a"})
    text +=
        fmt::format("{},{}\n", 1000 * (10 + std::count(text.begin(), text.end(), '\n') - 11), cell);
  text += rows(20, 30);
  const Recording recording = read(text, timed(by_name("t"), us), {by_name("a")});
  CHECK(recording.t_s.size() == 30);
  CHECK(recording.stretches.size() == 1);
  CHECK(faults_of(recording) == "missing/a 10 10;");
  for (std::size_t i = 10; i < 20; ++i) CHECK(std::isnan(readings(recording)[i]));
  CHECK(readings(recording)[20] == 120.0);
}

TEST_CASE("a column of words is refused, an empty one is missing", "[text_log]") {
  const std::string text = "t,state,none,a\n0,S,,1\n1,M,,2\n2,C,,3\n3,F,,4\n";
  CHECK_THROWS_WITH(read(text, timed(by_name("t"), 1.0), {by_name("state")}),
                    Contains("\"state\" holds no numbers but words such as \"S\""));
  CHECK_THROWS_AS(read(text, timed(by_name("state"), 1.0), {by_name("a")}), core::InputError);
  const Recording recording = read(text, timed(by_name("t"), 1.0), {by_name("none")});
  CHECK(faults_of(recording) == "missing/none 4 4e+03;");
}

TEST_CASE("rows of a wrong number of cells are counted, not skipped silently", "[text_log]") {
  const std::string text = "t,a\n" + rows(0, 10) + "10000,1,1\n" + "11000\n" + rows(12, 20) +
                           "LOW BATTERY\n" + rows(20, 30);
  const Recording recording = read(text, timed(by_name("t"), us), {by_name("a")});
  CHECK(recording.t_s.size() == 28);
  CHECK(faults_of(recording) == "missing/ 3 2;");  // the message took no time
  CHECK(recording.stretches.size() == 2);
  CHECK(recording.stretches[1].begin == 10);
}

TEST_CASE("a log of rows that mostly do not fit is refused", "[text_log]") {
  std::string text = "t,a\n" + rows(0, 300);
  for (int i = 0; i < 400; ++i) text += "1,2,3\n";
  CHECK_THROWS_WITH(read(text, timed(by_name("t"), us), {by_name("a")}),
                    Contains("400 of 700 rows do not have 2 cells"));
}

TEST_CASE("gaps, restarts, reboots and unreadable stamps are told apart", "[text_log]") {
  const auto faults = [](const std::string& text) {
    return faults_of(read(text, timed(by_name("t"), us), {by_name("a")}));
  };
  CHECK(faults("t,a\n" + rows(0, 40) + rows(45, 80)) == "gap/ 1 5;");
  CHECK(faults("t,a\n" + rows(0, 40) + rows(41, 80)) == "gap/ 1 1;");
  CHECK(faults("t,a\n" + rows(0, 40, 7000000) + rows(0, 30)) == "time_restart/ 1 0;");
  CHECK(faults("t,a\n" + rows(0, 40) + "t,a\n" + rows(0, 30)) == "time_restart/ 1 0;");
  CHECK(faults("t,a\n" + rows(0, 40) + "t,a\n" + rows(40, 80)) == "time_restart/ 1 0;");
  CHECK(faults("t,a\n" + rows(0, 40) + "x,5\n" + rows(41, 80)) == "missing/t 1 1;");
  CHECK(faults("t,a\n" + rows(0, 40) + ",5\n" + rows(41, 80)) == "missing/t 1 1;");
  CHECK(faults("t,a\n" + rows(0, 40) + rows(39, 80)) == "missing/t 1 0;");
}

TEST_CASE("readings stay beside their stamps when samples are left out", "[text_log]") {
  const std::string text =
      "t,a\n" + rows(0, 20) + "x,9\n" + rows(21, 30) + "29000,131\n" + rows(30, 40);
  const Recording recording = read(text, timed(by_name("t"), us), {by_name("a")});
  REQUIRE(readings(recording).size() == recording.t_s.size());
  for (std::size_t i = 0; i < recording.t_s.size(); ++i) {
    const double row = std::round(recording.t_s[i] * 1e3);
    const bool merged = row == 29.0;  // the mean of 129 and 131
    CHECK(readings(recording)[i] == 100.0 + row + (merged ? 1.0 : 0.0));
  }
}

TEST_CASE("a log cut off in mid-line is read up to its last whole line", "[text_log]") {
  const Recording recording =
      read("t,a\n" + rows(0, 30) + "30000", timed(by_name("t"), us), {by_name("a")});
  CHECK(recording.t_s.size() == 30);
  CHECK(faults_of(recording) == "truncated/ 1 1;");
  std::string zeros = "t,a\n" + rows(0, 30) + std::string(5000, '\0');
  CHECK(faults_of(read(zeros, timed(by_name("t"), us), {by_name("a")})) == "truncated/ 1 1;");
}

TEST_CASE("a cut at any byte loses one line at most, and is counted where it loses one",
          "[text_log]") {
  std::string whole = "t_us,fork\n";
  std::vector<std::size_t> line_ends;
  for (int i = 0; i < 60; ++i) {
    whole += fmt::format("{},{}\n", 1000 * i, 1500 + 7 * (i % 9));
    line_ends.push_back(whole.size());
  }
  for (std::size_t cut = 0; cut <= whole.size(); ++cut) {
    INFO("cut at " << cut);
    const auto lines = static_cast<std::size_t>(
        std::upper_bound(line_ends.begin(), line_ends.end(), cut) - line_ends.begin());
    const bool inside = lines < 60 && cut > (lines == 0 ? 10 : line_ends[lines - 1]);
    const bool all_but_line_end = inside && cut + 1 == line_ends[lines];
    try {
      const Recording recording =
          read(whole.substr(0, cut), timed(by_name("t_us"), us), {by_name("fork")});
      const auto samples = recording.t_s.size();
      const auto truncated = recording.faults.count(FaultKind::truncated);
      CHECK(samples + static_cast<std::size_t>(truncated) == lines + inside);
      if (!all_but_line_end && inside) CHECK(truncated == 1);
      for (std::size_t i = 0; i < samples; ++i)
        REQUIRE(readings(recording)[i] == 1500.0 + 7.0 * static_cast<double>(i % 9));
    } catch (const core::InputError&) {
      CHECK(lines <= 3);
    } catch (const core::JobError&) {
      CHECK(lines <= 3);
    }
  }
}

TEST_CASE("the recording does not depend on how the text was shared out", "[text_log]") {
  const std::string text = "t,a\n" + rows(0, 50) + "oops\n\n# note\n" + rows(53, 90) + "t,a\n" +
                           rows(0, 40) + ",\n" + rows(41, 60) + "6";
  const Recording whole = read(text, timed(by_name("t"), us), {by_name("a"), by_name("t")});
  for (const std::size_t chunk : {1, 2, 3, 7, 16, 50, 200, 1000}) {
    const Recording other =
        read(text, timed(by_name("t"), us), {by_name("a"), by_name("t")}, chunk);
    CHECK(other.t_s == whole.t_s);
    CHECK(readings(other) == readings(whole));
    CHECK(faults_of(other) == faults_of(whole));
  }
}

TEST_CASE("logs that cannot be read are refused with file and line", "[text_log]") {
  const auto refused = [](const std::string& text) -> std::string {
    try {
      read(text, timed(by_name("t"), us), {by_name("a")});
    } catch (const core::InputError& error) {
      return error.what();
    } catch (const core::JobError& error) {
      return error.what();
    }
    return "read";
  };
  CHECK_THAT(refused(""), Contains(".csv: the file is empty"));
  CHECK_THAT(refused("t,a\n"), Contains(".csv:1: ") && Contains("no row of readings"));
  CHECK_THAT(refused("t,b\n0,1\n1,2\n2,3\n"), Contains(".csv:1: ") && Contains("\"a\""));
  CHECK_THAT(refused("t,a\n0,1\n1000,2\n"), Contains("too few"));
  CHECK_THAT(refused("t,a\n0,1\n0,2\n0,3\n0,4\n"), Contains("does not advance"));
  CHECK_THROWS_AS(logs::read_text_log("no/such.csv", rated(1.0), {}), core::InputError);
  CHECK_THROWS_AS(logs::read_text_log("/", rated(1.0), {}), core::InputError);
  CHECK_THROWS_AS(read("a\n1\n2\n", rated(100.0), {by_name("a")}), core::JobError);
}

TEST_CASE("damaged logs are read or refused, never worse", "[text_log]") {
  const std::string good = "# Larch\nt,a,b\n" + [] {
    std::string text;
    for (int i = 0; i < 40; ++i) text += fmt::format("{},{},\"{}.5\"\n", 1000 * i, 100 + i, i);
    return text;
  }();
  std::uint32_t state = 12345;
  const auto random = [&] { return (state = state * 1664525U + 1013904223U) >> 8U; };
  int readable = 0;
  for (int round = 0; round < 3000; ++round) {
    std::string text = good;
    for (std::uint32_t k = 0; k <= random() % 6; ++k) {
      const std::size_t place = random() % text.size();
      const std::uint32_t kind = random() % 4;
      if (kind == 0) text[place] = static_cast<char>(random());
      if (kind == 1) text.erase(place, random() % 30);
      if (kind == 2) text.insert(place, text.substr(random() % text.size(), random() % 40));
      if (kind == 3) text.insert(place, 1, ",;\"\n\r #\t"[random() % 8]);
    }
    try {
      const Recording recording = read(text, timed(by_name("t"), us), {by_name("a"), by_name("b")});
      REQUIRE(readings(recording).size() == recording.t_s.size());
      for (std::size_t i = 1; i < recording.t_s.size(); ++i)
        REQUIRE(recording.t_s[i] > recording.t_s[i - 1]);
      ++readable;
    } catch (const core::InputError&) {
    } catch (const core::JobError&) {
    }
  }
  CHECK(readable > 1000);
}

TEST_CASE("each sample log of tests/data/logs gives its expected reading", "[text_log]") {
  // <name>.csv beside <name>.expected: a line of faults, then t_ms and the readings of column 2.
  const std::string folder = std::string(CLICKWISE_SOURCE_DIR) + "/tests/data/logs/";
  for (const std::string name :
       {"quarry_nine_semicolon", "quarry_nine_reboot", "quarry_nine_wrap", "quarry_nine_quoted"}) {
    INFO(name);
    std::ifstream expected(folder + name + ".expected");
    std::string faults;
    REQUIRE(std::getline(expected, faults));
    const Recording recording =
        logs::read_text_log(folder + name + ".csv", timed(by_number(1), us), {by_number(2)});
    CHECK(faults_of(recording) == faults);
    double t_ms = 0.0;
    double reading = 0.0;
    std::size_t count = 0;
    for (; expected >> t_ms >> reading; ++count) {
      REQUIRE(count < recording.t_s.size());
      CHECK(recording.t_s[count] * 1e3 == Approx(t_ms).margin(1e-9));
      CHECK(readings(recording)[count] == reading);
    }
    CHECK(count == recording.t_s.size());
  }
}
