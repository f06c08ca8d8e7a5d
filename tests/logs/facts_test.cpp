#include "clickwise/logs/facts.hpp"

#include <fmt/format.h>

#include <catch2/catch.hpp>
#include <cmath>

#include "clickwise/core/errors.hpp"
#include "support/log_file.hpp"

using namespace clickwise;
using logs::ColumnKind;

namespace {

logs::LogFacts inspect(const std::string& text, const bike::LogFormat* format = nullptr) {
  return logs::inspect_text_log(test::LogFile(text).path(), format);
}

// A log of `count` rows whose first column is `name`, stepping by `step`.
logs::LogFacts inspect_clock(const std::string& name, double step, int count = 400) {
  std::string text = name + ",fork\n";
  for (int i = 0; i < count; ++i) text += fmt::format("{:.6g},{}\n", step * i, 100 + i * 37 % 50);
  return inspect(text);
}

}  // namespace

TEST_CASE("kinds, ranges and resolutions of columns", "[facts]") {
  std::string text = "t_ms,adc,mm,state,none,same,holes\n";
  for (int i = 0; i < 50; ++i)
    text += fmt::format("{},{},{:.4f},{},,7,{}\n", 2 * i, 100 + 4 * (i % 5), 0.005 * (i * i % 13),
                        i % 2 ? "S" : "M", i % 10 == 3 ? "" : std::to_string(i));
  const logs::LogFacts facts = inspect(text);
  REQUIRE(facts.columns.size() == 7);
  const auto kind = [&](std::size_t k) { return facts.columns[k].kind; };
  CHECK(kind(0) == ColumnKind::number);
  CHECK(kind(3) == ColumnKind::text);
  CHECK(kind(4) == ColumnKind::empty);
  CHECK(kind(5) == ColumnKind::constant);
  CHECK(facts.rows == 50);
  CHECK(facts.columns[1].least == 100.0);
  CHECK(facts.columns[1].most == 116.0);
  CHECK(facts.columns[1].resolution == 4.0);
  CHECK(facts.columns[2].resolution == Approx(0.005).epsilon(1e-12));
  CHECK(facts.columns[3].example == "M");
  CHECK(facts.columns[4].missing == 50);
  CHECK(facts.columns[6].missing == 5);
  CHECK(facts.columns[6].count == 45);
  REQUIRE(facts.time);
  CHECK(facts.time->column == 0);
  CHECK(facts.rate_hz == Approx(500.0));
  CHECK(facts.duration_s == Approx(0.098));
}

TEST_CASE("the unit of time is told by the name", "[facts]") {
  for (const auto& [name, unit] :
       std::vector<std::pair<std::string, std::string>>{{"time_s", "s"},
                                                        {"Time (ms)", "ms"},
                                                        {"t_us", "us"},
                                                        {"micros", "us"},
                                                        {"millis", "ms"},
                                                        {"timestamp_seconds", "s"},
                                                        {"t [µs]", "us"}}) {
    const logs::LogFacts facts = inspect_clock(name, 4.0);
    INFO(name);
    REQUIRE(facts.time);
    CHECK(facts.time->unit == unit);
    CHECK(facts.time->unit_by_name);
  }
}

TEST_CASE("otherwise the unit of time is the one that gives a plausible rate", "[facts]") {
  for (const auto& [step, unit] : std::vector<std::pair<double, std::string>>{
           {0.001, "s"}, {0.01, "s"}, {1.0, "ms"}, {10.0, "ms"}, {500.0, "us"}, {1000.0, "us"}}) {
    const logs::LogFacts facts = inspect_clock("time", step);
    INFO(step);
    REQUIRE(facts.time);
    CHECK(facts.time->unit == unit);
    CHECK_FALSE(facts.time->unit_by_name);
    CHECK(facts.rate_hz >= 50.0);
    CHECK(facts.rate_hz <= 5000.0);
  }
}

TEST_CASE("a row counter is not taken for the time, a nameless clock is", "[facts]") {
  std::string text = "row,stamp,fork\n";
  std::string bare;
  for (int i = 0; i < 100; ++i) {
    text += fmt::format("{},{},{}\n", i, 5000 * i, i * 37 % 50);
    bare += fmt::format("{},{}\n", i * 37 % 50, 1000 * i);
  }
  REQUIRE(inspect(text).time);
  CHECK(inspect(text).time->column == 1);
  REQUIRE(inspect(bare).time);
  CHECK(inspect(bare).time->column == 1);
  CHECK_FALSE(inspect(bare).time->by_name);
  CHECK_FALSE(inspect("a,b\n5,3\n2,8\n9,1\n4,4\n").time);
}

TEST_CASE("gaps, restarts and damaged rows of the guessed clock", "[facts]") {
  std::string text = "t_ms,a\n";
  for (int i = 0; i < 300; ++i) {
    if (i == 100) i += 25;
    if (i == 200) text += "broken row\n";
    text += fmt::format("{},{}\n", 2 * i % 500, i);
  }
  const logs::LogFacts facts = inspect(text + "60");
  CHECK(facts.malformed_rows == 1);
  CHECK(facts.truncated);
  CHECK(facts.faults.count(run::FaultKind::gap) == 1);
  CHECK(facts.faults.count(run::FaultKind::time_restart) == 1);
  CHECK(facts.faults.count(run::FaultKind::truncated) == 1);
  CHECK(facts.longest_gap_s == Approx(0.050));
}

TEST_CASE("a bike file's clock is taken instead of a guess", "[facts]") {
  const std::string text = "time,stamp,a\n0,0,1\n1,10,2\n2,20,3\n3,30,4\n";
  bike::LogFormat format;
  format.time = bike::TimeColumn{{"stamp", 0}, 1e-3};
  CHECK(inspect(text, &format).rate_hz == Approx(100.0));
  format.time.reset();
  format.rate_hz = 50.0;
  CHECK(inspect(text, &format).rate_hz == 50.0);
  CHECK(inspect(text, &format).duration_s == Approx(0.08));
  format.time = bike::TimeColumn{{"nothing", 0}, 1e-3};
  CHECK_THROWS_AS(inspect(text, &format), core::InputError);
}
