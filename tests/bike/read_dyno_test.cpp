// Dyno tables beside a bike file: what is read, counted, and refused with its line.
#include <catch2/catch.hpp>
#include <cmath>
#include <filesystem>
#include <fstream>
#include <random>

#include "clickwise/bike/bike_file.hpp"
#include "support/bike_text.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using Catch::Matchers::EndsWith;

namespace {

// A folder of its own, gone with the test.
class Folder {
public:
  Folder()
      : path_(std::filesystem::temp_directory_path() /
              ("clickwise-dyno-" + std::to_string(std::random_device{}()))) {
    std::filesystem::create_directory(path_);
  }
  ~Folder() { std::filesystem::remove_all(path_); }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;

  std::string file(const std::string& name) const { return (path_ / name).string(); }
  void write(const std::string& name, const std::string& text) const {
    std::ofstream(file(name), std::ios::binary) << text;
  }

private:
  std::filesystem::path path_;
};

const std::string dyno_lines = "[front.damper]\nkind = \"dyno\"\nfile = \"fork_dyno.csv\"\n";

bike::DynoDamper read(const std::string& table, const std::string& more = "") {
  const Folder folder;
  folder.write("fork_dyno.csv", table);
  const auto bike =
      bike::parse_bike(test::minimal_bike_text + dyno_lines + more, folder.file("larch.toml"));
  return std::get<bike::DynoDamper>(*bike.front->damper);
}

std::string refused(const std::string& table, const std::string& more = "") {
  return test::refusal([&] { read(table, more); });
}

}  // namespace

TEST_CASE("a dyno table gives signed points with their settings and lines", "[bike][dyno]") {
  const auto damper = read(
      "# fork, 20 C\nforce_n,velocity_mm_s,low_speed_compression,low_speed_rebound\n"
      "120.5,100,4,9\n\n-300,-250.5,,2\n");
  REQUIRE(damper.points.size() == 2);
  CHECK(damper.points[0].velocity_m_s == Approx(0.1).epsilon(1e-15));
  CHECK(damper.points[0].force_n == 120.5);
  CHECK(damper.points[0].setting[0] == 4.0);
  CHECK(std::isnan(damper.points[0].setting[1]));
  CHECK(damper.points[0].line == 3);
  CHECK(damper.points[1].velocity_m_s == Approx(-0.2505).epsilon(1e-15));
  CHECK(damper.points[1].line == 5);
  CHECK(damper.points[1].setting[2] == 2.0);
}

TEST_CASE("quotes, a byte-order mark and line ends of any kind do not matter", "[bike][dyno]") {
  const auto damper = read("\xEF\xBB\xBF\"velocity_mm_s\", force_n\r\n\"1e2\",5\r\n-1,-2");
  REQUIRE(damper.points.size() == 2);
  CHECK(damper.points[0].velocity_m_s == Approx(0.1).epsilon(1e-15));
  CHECK(damper.points[1].force_n == -2.0);
}

TEST_CASE("adjusters that the bike file does not count are counted by the table", "[bike][dyno]") {
  const std::string table =
      "velocity_mm_s,force_n,low_speed_compression,low_speed_rebound\n"
      "100,50,0,0\n100,40,7,0\n100,30,12,0\n-100,-50,12,3\n";
  const auto damper = read(table);
  REQUIRE(damper.bleed_compression);
  CHECK(damper.bleed_compression->clicks == 12);
  CHECK(damper.bleed_compression->setting == 7);
  CHECK(damper.bleed_rebound->clicks == 3);
  CHECK(!damper.valve_compression);
  REQUIRE(damper.notes.size() == 2);
  CHECK_THAT(damper.notes[0], Contains("low-speed compression") &&
                                  Contains("12 clicks, now at 7") &&
                                  Contains("compression = { bleed = { clicks = 12, setting = 7 }"));
  const auto counted = read(table,
                            "compression = { bleed = { clicks = 16, setting = 8 } }\n"
                            "rebound = { bleed = { clicks = 18, setting = 9 } }\n");
  CHECK(counted.bleed_compression->clicks == 16);
  CHECK(counted.bleed_rebound->setting == 9);
  CHECK(counted.notes.empty());
}

TEST_CASE("rows at rest are left out, and said", "[bike][dyno]") {
  const auto damper = read("velocity_mm_s,force_n\n0,12\n100,50\n-0,3\n");
  CHECK(damper.points.size() == 1);
  REQUIRE(damper.notes.size() == 1);
  CHECK_THAT(damper.notes[0], Contains("2 rows at rest"));
}

TEST_CASE("what is wrong with a dyno table is said with its line", "[bike][dyno]") {
  const std::string head = "velocity_mm_s,force_n,low_speed_compression\n";
  const auto says = [](const std::string& words) { return Contains("fork_dyno.csv" + words); };
  CHECK_THAT(refused(""), says(": the dyno table is empty"));
  CHECK_THAT(refused(head), says(":1: the dyno table has no point that moves"));
  CHECK_THAT(refused(head + "100,5O,4\n"), says(":2: force_n = \"5O\" is not a number"));
  CHECK_THAT(refused(head + "nan,50,4\n"), says(":2: velocity_mm_s = \"nan\" is not a number"));
  CHECK_THAT(refused(head + "1,2,3\n100,50\n"), says(":3: the row has 2 cells and the header 3"));
  CHECK_THAT(refused(head + "100,5,5,4\n"), says(":2: the row has 4 cells"));
  CHECK_THAT(refused(head + "100,50,4.5\n"), says(":2: low_speed_compression = \"4.5\""));
  CHECK_THAT(refused(head + "100,50,-1\n"), Contains("clicks out from closed"));
  CHECK_THAT(refused(head + "100,50,\n"), says(":2: low_speed_compression = \"\""));
  CHECK_THAT(refused(head + "3e5,50,4\n"), Contains("check the unit"));
  CHECK_THAT(refused("velocity_mm_s\n100\n"), says(":1: a dyno table needs the columns"));
  CHECK_THAT(refused("velocity_mm_s;force_n\n100;50\n"), says(":1: the column"));
  CHECK_THAT(refused("velocity_mm_s,force_n,low_speed_compresion\n"),
             EndsWith("did you mean low_speed_compression?"));
  CHECK_THAT(refused("force_n,velocity_mm_s,force_n\n"),
             says(":1: the column force_n is there twice"));
  CHECK_THAT(
      refused(head + "100,50,17\n", "compression = { bleed = { clicks = 16, setting = 8 } }\n"),
      says(":2: low_speed_compression = 17, but the bike file counts 16 clicks"));
}

TEST_CASE("another sign convention is refused, a stray sign is not", "[bike][dyno]") {
  const std::string head = "velocity_mm_s,force_n\n";
  CHECK_THAT(refused(head + "1,2\n100,50\n-100,50\n-200,60\n-300,-1\n"),
             Contains("fork_dyno.csv:4: in 2 of 3 rebound rows"));
  CHECK(read(head + "1,-0.2\n100,50\n200,80\n").points.size() == 3);
}

TEST_CASE("a dyno table that is not there is told at the bike file's line", "[bike][dyno]") {
  const Folder folder;
  CHECK_THAT(
      test::refusal([&] {
        bike::parse_bike(test::minimal_bike_text + dyno_lines, folder.file("larch.toml"));
      }),
      Contains("larch.toml:12:") && Contains("there is no such file") && Contains("fork_dyno.csv"));
}

TEST_CASE("a damaged dyno table is read or refused with its name, and never crashes",
          "[bike][dyno]") {
  const std::string whole =
      "velocity_mm_s,force_n,low_speed_compression\n100,50,4\n\"200\",80,4\n-100,-60,\n";
  std::mt19937 random(7);
  const auto below = [&](std::size_t most) {
    return std::uniform_int_distribution<std::size_t>(0, most - 1)(random);
  };
  int reads = 0;
  int refusals = 0;
  for (int i = 0; i < 300; ++i) {
    std::string text = whole.substr(0, below(whole.size() + 1));
    if (!text.empty()) text[below(text.size())] = static_cast<char>(below(256));
    try {
      read(text);
      ++reads;
    } catch (const core::InputError& error) {
      CHECK_THAT(error.what(), Contains("fork_dyno.csv") && Contains("; "));
      ++refusals;
    }
  }
  CHECK(reads > 0);
  CHECK(refusals > 0);
}
