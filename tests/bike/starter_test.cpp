#include "clickwise/bike/starter.hpp"

#include <catch2/catch.hpp>

#include "clickwise/bike/bike_file.hpp"
#include "support/bike_text.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using clickwise::bike::starter_bike;
using clickwise::bike::StarterFacts;
using clickwise::test::refusal;
using clickwise::test::replaced;

namespace {

StarterFacts facts() {
  StarterFacts f;
  f.log_name = "run1.csv";
  f.time = bike::ColumnRef{"t_us", 0};
  f.time_unit = "us";
  f.speed = bike::ColumnRef{"wheel_kmh", 0};
  f.candidates = {{{"temp", 0}, 21.0, 22.0},
                  {{"shock_adc", 0}, 300.0, 3000.0},
                  {{"fork_adc", 0}, 212.0, 3760.5}};
  return f;
}

// Every "?" in turn by the answers a user gives to one end: stroke, then three of the calibration.
std::string filled(std::string text) {
  const std::string answers[] = {"150.0", "200", "3900", "150.0"};
  for (int i = 0;
       text.find("= \"?\"") != std::string::npos || text.find("[\"?\"") != std::string::npos ||
       text.find(", \"?\"") != std::string::npos;
       ++i) {
    const auto at = text.find("\"?\"", text.find("[log]"));
    text.replace(at, 3, answers[i % 4]);
  }
  return text;
}

}  // namespace

TEST_CASE("a starter file reads once its marks are filled, and names the right columns", "[bike]") {
  const std::string text = starter_bike(facts());
  const bike::Bike b = bike::parse_bike(filled(text), "start.toml");
  CHECK(b.front->sensor.column.name == "fork_adc");
  CHECK(b.rear->sensor.column.name == "shock_adc");
  CHECK(b.log.time->seconds_per_unit == 1e-6);
  CHECK(b.log.speed->column.name == "wheel_kmh");
  CHECK(b.front->stroke_m == 0.15);
  CHECK_THAT(text, Contains("reads 212 to 3760.5") && Contains("also numeric: temp, 21 to 22"));
  CHECK_THAT(text, Contains("Extend it fully") && Contains("compress it fully"));
}

TEST_CASE("a starter file is refused at the first mark that is left", "[bike]") {
  const std::string text = starter_bike(facts());
  CHECK_THAT(refusal([&] { bike::parse_bike(text, "start.toml"); }),
             Contains("front.stroke_mm = \"?\": must be a number in mm"));
}

TEST_CASE("without names or a time column the first columns are taken in order", "[bike]") {
  StarterFacts f;
  f.log_name = "run\n2.csv";
  f.candidates = {{{"", 2}, 0.0, 1.0}, {{"", 5}, 0.0, 1.0}};
  std::string text = starter_bike(f);
  CHECK_THAT(text, Contains("rate_hz = \"?\""));
  text = replaced(text, "rate_hz = \"?\"", "rate_hz = 500");
  const bike::Bike b = bike::parse_bike(filled(text), "start.toml");
  CHECK(b.log.rate_hz == 500.0);
  CHECK(b.front->sensor.column.number == 2);
  CHECK(b.rear->sensor.column.number == 5);
}

TEST_CASE("a header with quotes and breaks stays one text", "[bike]") {
  StarterFacts f = facts();
  f.candidates = {{{"fork \"raw\"\\\n[mm]", 0}, 0.0, 1.0}};
  const bike::Bike b = bike::parse_bike(filled(starter_bike(f)), "start.toml");
  CHECK(b.front->sensor.column.name == "fork \"raw\"\\\n[mm]");
  CHECK(!b.rear);
}

TEST_CASE("a log without a candidate still gets a front end to complete", "[bike]") {
  StarterFacts f = facts();
  f.candidates.clear();
  CHECK_THAT(starter_bike(f), Contains("[front.sensor]") && Contains("column = \"?\""));
}
