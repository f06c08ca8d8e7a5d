#include <fmt/format.h>

#include <algorithm>
#include <catch2/catch.hpp>
#include <string>
#include <vector>

#include "clickwise/bike/bike_file.hpp"
#include "support/bike_text.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;
using clickwise::test::larch_text;
using clickwise::test::minimal_bike_text;
using clickwise::test::refusal;
using clickwise::test::replaced;

namespace {

// One edit of the whole file, and what the message must say. '@' in `to` marks where the message
// must point; without one it points at the first `at` of the text ("": the file as a whole).
struct Mistake {
  std::string from;
  std::string to;
  std::string starts;
  std::string contains;
  std::string at = "";
};

// ":line:column" of an offset, counted from 1.
std::string position(const std::string& text, std::size_t offset) {
  const auto line = 1 + std::count(text.begin(), text.begin() + static_cast<long>(offset), '\n');
  const auto before = offset == 0 ? std::string::npos : text.rfind('\n', offset - 1);
  const auto column = before == std::string::npos ? offset + 1 : offset - before;
  return fmt::format(":{}:{}", line, column);
}

void check(const std::string& text, const Mistake& mistake) {
  INFO(mistake.from << " -> " << mistake.to);
  std::string wrong = replaced(text, mistake.from, mistake.to);
  REQUIRE(wrong != text);
  auto place = wrong.find('@');
  if (place != std::string::npos)
    wrong.erase(place, 1);
  else if (!mistake.at.empty())
    place = wrong.find(mistake.at);
  const std::string where = place == std::string::npos ? "" : position(wrong, place);
  const std::string message = refusal([&] { bike::parse_bike(wrong, "larch.toml"); });
  CHECK_THAT(message, StartsWith(fmt::format("larch.toml{}: {}", where, mistake.starts)));
  CHECK_THAT(message, Contains(mistake.contains) && Contains("; "));
}

}  // namespace

TEST_CASE("mistakes in schema and log are refused where they stand", "[bike]") {
  const std::vector<Mistake> mistakes{
      {"schema = \"clickwise-bike-1\"", "", "this is not a bike file: schema is missing",
       "schema = \"clickwise-bike-1\""},
      {"\"clickwise-bike-1", "@\"clickwise-bike-2", "schema = \"clickwise-bike-2\"",
       "another version"},
      {"\"clickwise-bike-1", "@\"clickwise-day-1", "schema", "not a bike file"},
      {"\"clickwise-bike-1\"", "@1", "schema = 1", "text in quotes"},
      {"unit = \"us\"", "unit = @\"sec\"", "log.time.unit = \"sec\"",
       "one of \"s\", \"ms\", \"us\""},
      {"column = \"t_us\", ", "", "log.time.column is missing", "column = ", "{ unit"},
      {"column = \"t_us\"", "column = @0", "log.time.column = 0", "from 1 to"},
      {"column = \"t_us\"", "column = @1.5", "log.time.column = 1.5", "counted from 1"},
      {"time = { column = \"t_us\", unit = \"us\" }", "", "log: the log's time is missing",
       "rate_hz", "[log]"},
      {"speed = {", "rate_hz = @1000\nspeed = {", "log.rate_hz = 1000", "not both"},
      {"speed = {", "packed = @{ endian = \"little\" }\nspeed = {", "log.packed", "frame",
       "missing"},
      {"speed = {", "packed = { frame = [[\"t_us\", @\"u24\"]] }\nspeed = {",
       "log.packed.frame[1][2] = \"u24\"", "\"u32\""},
      {"speed = {", "packed = { frame = [[\"a\", \"u8\"], @[\"a\", \"u8\"]] }\nspeed = {",
       "log.packed.frame[2] =", "pad_1"},
      {"speed = {", "packed = { endian = @\"middle\", frame = [[\"a\", \"u8\"]] }\nspeed = {",
       "log.packed.endian = \"middle\"", "\"little\""},
      {"speed = {",
       "packed = { frame = [[\"a\", \"u8\"]] }\nhdf5 = @{ group = \"/ride\" }\nspeed = {",
       "log.hdf5", "not both"},
      {"speed = {", "hdf5 = { group = @7 }\nspeed = {", "log.hdf5.group = 7", "text"},
      {"speed = {", "rate_hz = @0\nspeed = {", "log.rate_hz = 0", "Hz"},
      {"unit = \"km/h\"", "unit = @\"mph\"", "log.speed.unit = \"mph\"", "\"km/h\""},
  };
  for (const Mistake& mistake : mistakes) check(larch_text, mistake);
}

TEST_CASE("mistakes in masses and ends are refused where they stand", "[bike]") {
  const std::vector<Mistake> mistakes{
      {"mass_kg = 78.0", "mass_kg = 78.0\nmass_lb = @172", "rider.mass_lb = 172",
       "mass_kg is given as well"},
      {"mass_kg = 78.0", "mass_kg = @780", "rider.mass_kg = 780", "from 10 to 300 kg"},
      {"mass_kg = 78.0", "mass_lb = @1720", "rider.mass_lb = 1720", "from 22.0462 to 661.387 lb"},
      {"mass_kg = 78.0", "@mass = 78.0", "rider.mass: unknown key", "did you mean mass_kg?"},
      {"[rider]", "[@ridr]", "ridr: unknown key", "did you mean rider?"},
      {"front_share = 0.42", "front_share = @42", "chassis.front_share = 42",
       "above 0 and below 1"},
      {"stroke_mm = 170.0", "stroke_mm = @\"abc\"", "front.stroke_mm = \"abc\"",
       "must be a number in mm; write for example stroke_mm = 170.0"},
      {"stroke_mm = 170.0", "stroke_mm = @0.17", "front.stroke_mm = 0.17", "from 10 to 500 mm"},
      {"stroke_mm = 170.0", "stroke_mm = @nan", "front.stroke_mm = nan", "finite"},
      {"stroke_mm = 170.0", "stroke_mm = @inf", "front.stroke_mm = inf", "finite"},
      {"stroke_mm = 170.0", "", "front.stroke_mm is missing", "stroke_mm = 170.0", "[front]"},
      {"stroke_mm = 170.0", "@stroke = 170.0", "front.stroke: unknown key",
       "did you mean stroke_mm?"},
      {"sprung_accel", "@sprung_acel", "front.sprung_acel: unknown key",
       "did you mean sprung_accel?"},
      {"up = -1", "@upward = -1", "front.sprung_accel.upward: unknown key", "remove it"},
      {"up = -1", "up = @0", "front.sprung_accel.up = 0", "write up = 1 where"},
      {"up = -1", "up = @2", "front.sprung_accel.up = 2", "-1"},
      {"unit = \"m/s2\"", "unit = @\"ft/s2\"", "front.sprung_accel.unit = \"ft/s2\"", "\"m/s2\""},
      {"friction_n", "@fricton_n", "front.fricton_n: unknown key", "did you mean friction_n?"},
      {"stiffness_n_mm = 90.0", "@stiffness_n_m = 90000.0", "front.tyre.stiffness_n_m: unknown key",
       "did you mean stiffness_n_mm?"},
      {"within_mm = 4.0", "within_mm = @100", "front.bottom_out.within_mm = 100",
       "from 0.1 to 85 mm"},
      {"compression_mm_s = 700.0", "compression_mm_s = @0", "front.split.compression_mm_s = 0",
       "mm/s"},
      {"kind = \"potentiometer\"", "kind = \"imu_pair\"", "front.sensor",
       "upper = ", "[front.sensor]"},
      {"kind = \"potentiometer\"", "kind = @\"potentiometre\"", "front.sensor.kind",
       "kind = \"potentiometer\""},
      {"[[210, 0.0], [3850, 170.0]]", "@[[210, 0.0]]", "front.sensor.calibration", "at least 2"},
      {"[[210, 0.0], [3850, 170.0]]", "[[210, 0.0], @[210, 170.0]]", "front.sensor.calibration[2]",
       "readings must rise, or fall"},
      {"[2000, 31.0], [180, 60.0]]", "[2000, 31.0], @[180, 20.0]]", "rear.sensor.calibration[3]",
       "travel must rise, or fall"},
      {"[[210, 0.0], [3850, 170.0]]", "@[[0, 0.0], [5e-324, 170.0]]", "front.sensor.calibration",
       "too close together"},
      {"ratio = 1.0", "ratio = @-1.0", "front.ratio = -1.0", "from 0.05 to 20"},
      {"[[0, 3.0], [60, 2.4]]", "[[60, 3.0], @[0, 2.4]]", "rear.ratio[2]", "increase"},
      {"[[0, 3.0], [60, 2.4]]", "@[[0, 3.0], [10, 2.4]]", "rear.ratio", "not above 0"},
      {"[aims]\n", "[aims]\n@balance = 0.1\n", "aims.balance: unknown key",
       "did you mean balance_share?"},
      {"[aims]\n", "[aims]\ntravel_mean_share_low = 0.5\n", "aims: travel_mean_share_low",
       "must be below", "[aims]"},
  };
  for (const Mistake& mistake : mistakes) check(larch_text, mistake);
}

TEST_CASE("mistakes in springs are refused where they stand", "[bike]") {
  const std::vector<Mistake> mistakes{
      {"[[0, 90], [40, 300]", "[[0, 90], @[40, 80]", "front.spring.points[2]", "must not fall"},
      {"[[0, 90], [40, 300]", "[@[0, -90], [40, 300]", "front.spring.points[1]", "from 0 to"},
      {"[[0, 90], [40, 300]", "@[[30, 90], [40, 300]", "front.spring.points", "below 0 N"},
      {"length_mm = 12.0", "length_mm = @171", "front.spring.bumper.length_mm = 171", "170 mm"},
      {"volume_mm3 = 130000.0", "volume_mm3 = @66000", "rear.spring.volume_mm3 = 66000",
       "66000 mm³"},
      {"pressure_psi = 160.0", "pressure_kpa = 1103\npressure_psi = @160.0",
       "rear.spring.pressure_psi = 160.0", "pressure_kpa is given as well"},
      {"pressure_psi = 160.0", "pressure_psi = @0", "rear.spring.pressure_psi = 0", "psi"},
      {"pressure_psi = 160.0\n", "", "rear.spring.pressure_kpa is missing",
       "pressure_kpa =", "[rear.spring]"},
      {"exponent = 1.25", "exponent = @0.9", "rear.spring.exponent = 0.9", "from 1 to 2"},
  };
  for (const Mistake& mistake : mistakes) check(larch_text, mistake);
}

TEST_CASE("mistakes in dampers are refused where they stand", "[bike]") {
  const std::vector<Mistake> mistakes{
      {"setting = 8", "setting = @17", "front.damper.compression.bleed.setting = 17",
       "from 0 to 16"},
      {"setting = 8", "setting = @-1", "front.damper.compression.bleed.setting = -1",
       "from 0 to 16"},
      {"clicks = 16", "clicks = @0", "front.damper.compression.bleed.clicks = 0", "from 1 to 200"},
      {"setting = 8", "setting = @8.5", "front.damper.compression.bleed.setting = 8.5",
       "whole number"},
      {"open_mm_s = 190.0", "open_mm_s = @10", "front.damper.compression.bleed.open_mm_s = 10",
       "above closed_mm_s"},
      {"open_n = 140.0", "open_n = @640", "front.damper.compression.valve.open_n = 640",
       "below closed_n"},
      {", slope_n_s_m = 180.0", "", "front.damper.compression.valve.slope_n_s_m is missing",
       "slope_n_s_m = 180.0", "{ closed_n"},
      {"slope_n_s_m = 520.0", "slope_n_s_m = @0", "front.damper.rebound.valve.slope_n_s_m",
       "above 0"},
      {"kind = \"hydraulic\"", "kind = @\"hydraulc\"", "front.damper.kind",
       "write for example kind = \"hydraulic\""},
      {"shape = \"digressive\"", "shape = @\"regressive\"", "rear.damper.shape", "\"progressive\""},
      {"damping_ratio = 0.30", "damping_ratio = @30", "rear.damper.damping_ratio = 30",
       "from 0.01 to 2"},
  };
  for (const Mistake& mistake : mistakes) check(larch_text, mistake);
}

TEST_CASE("a side of a damper through which nothing flows is refused", "[bike]") {
  const std::string text = minimal_bike_text +
                           "[front.damper]\nkind = \"hydraulic\"\n[front.damper.compression]\n" +
                           "port = { n_s2_m2 = 22.0 }\n[front.damper.rebound]\n";
  CHECK_THAT(refusal([&] { bike::parse_bike(text, "larch.toml"); }),
             StartsWith("larch.toml:12:1: front.damper.compression: without a bleed and a valve"));
}

TEST_CASE("a file without an end is refused", "[bike]") {
  const std::string text = minimal_bike_text.substr(0, minimal_bike_text.find("[front]"));
  CHECK_THAT(refusal([&] { bike::parse_bike(text, "larch.toml"); }),
             StartsWith("larch.toml: neither [front] nor [rear]"));
}

TEST_CASE("a sensor that is missing is asked for with an example", "[bike]") {
  const std::string text = minimal_bike_text.substr(0, minimal_bike_text.find("[front.sensor]"));
  CHECK_THAT(refusal([&] { bike::parse_bike(text, "larch.toml"); }),
             StartsWith("larch.toml:4:1: front.sensor is missing") && Contains("calibration = "));
}

TEST_CASE("wheels that weigh more than bike and rider are refused", "[bike]") {
  std::string text = replaced(larch_text, "mass_kg = 78.0", "mass_kg = 10.0");
  text = replaced(text, "unsprung_mass_kg = 2.9", "unsprung_mass_kg = 25.0");
  CHECK_THAT(refusal([&] { bike::parse_bike(text, "larch.toml"); }),
             StartsWith("larch.toml:8:1: chassis: rider and chassis weigh no more than"));
}

TEST_CASE("mistakes in an IMU pair are refused where they stand", "[bike]") {
  const std::string pair =
      "kind = \"imu_pair\"\nupper = { accel = [\"a\", \"b\", \"c\"] }\n"
      "lower = { accel = [4, 5, 6] }\naccel_unit = \"g\"\naxis = [0, 0, 1]\n";
  std::string text = minimal_bike_text;
  const auto begin = text.find("kind");
  const auto end = text.find("calibration");
  text.replace(begin, text.find('\n', end) + 1 - begin, pair);
  REQUIRE_NOTHROW(bike::parse_bike(text, "larch.toml"));
  const std::vector<Mistake> mistakes{
      {"[4, 5, 6]", "@[4, 5]", "front.sensor.lower.accel", "three columns"},
      {"[4, 5, 6]", "@[4, 5, 5]", "front.sensor.lower.accel", "column 5 twice"},
      {"axis = [0, 0, 1]", "axis = @[0, 0, 0]", "front.sensor.axis", "no direction"},
      {"accel_unit = \"g\"", "accel_unit = @\"G\"", "front.sensor.accel_unit", "\"m/s2\""},
      {"axis = [0, 0, 1]", "axis = [0, 0, 1]\n@spacing = 400", "front.sensor.spacing",
       "did you mean spacing_mm?"},
  };
  for (const Mistake& mistake : mistakes) check(text, mistake);
}

TEST_CASE("a potentiometer may have an IMU pair beside it, and a link swings by its gyros",
          "[bike]") {
  const std::string units =
      "[front.sensor.imu]\nupper = { gyro = [\"a\", \"b\", \"c\"] }\n"
      "lower = { gyro = [4, 5, 6] }\ngyro_unit = \"deg/s\"\nswing_axis = [0, 2, 0]\narm_mm = 430\n";
  const bike::Bike bike =
      bike::parse_bike(std::string(minimal_bike_text) + "\n" + units, "larch.toml");
  REQUIRE(bike.front->has_potentiometer());
  REQUIRE(bike.front->imu);
  CHECK(bike.front->imu->swinging());
  CHECK(bike.front->imu->axis[1] == 1.0);
  CHECK((*bike.front->imu->swing_m)(0.1) == Approx(0.043));
}
