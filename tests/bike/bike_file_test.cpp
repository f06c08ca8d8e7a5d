#include "clickwise/bike/bike_file.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <random>

#include "clickwise/bike/spring.hpp"
#include "support/bike_text.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using clickwise::bike::parse_bike;
using clickwise::test::larch_text;
using clickwise::test::minimal_bike_text;
using clickwise::test::replaced;

namespace {
bike::Bike larch() {
  return parse_bike(larch_text, "larch.toml");
}
}  // namespace

TEST_CASE("a whole bike file is read into SI", "[bike]") {
  const bike::Bike b = larch();
  CHECK(b.name == "Larch, practice mule");
  CHECK(b.text == larch_text);
  CHECK(b.log.time->column.name == "t_us");
  CHECK(b.log.time->seconds_per_unit == 1e-6);
  CHECK(b.log.speed->metres_per_second_per_unit == Approx(1000.0 / 3600.0).epsilon(1e-15));
  CHECK(b.wheelbase_m == 1.245);
  REQUIRE(b.front);
  CHECK(b.front->stroke_m == 0.17);
  CHECK(b.front->tyre->stiffness_n_m == 90e3);
  CHECK(b.front->split.rebound_m_s == 0.65);
  CHECK(b.front->sensor.travel_m(210.0) == 0.0);
  CHECK(b.front->sensor.travel_m(3850.0) == Approx(0.17).epsilon(1e-15));
  const auto& damper = std::get<bike::HydraulicDamper>(*b.front->damper);
  CHECK(damper.compression.bleed->value() == Approx(0.101).epsilon(1e-15));
  CHECK(damper.compression.valve->value() == 380.0);
  CHECK(damper.rebound.fixed_valve_n == 90.0);
  CHECK(damper.rebound.port_n_s2_m2 == 30.0);
  CHECK(b.front->damper_place.line == 29);
  CHECK(b.aims.travel_used_share == 0.85);
}

TEST_CASE("a falling calibration is turned round, point by point", "[bike]") {
  const bike::Bike b = larch();
  const auto& sensor = b.rear->sensor;
  CHECK(sensor.column.number == 3);
  CHECK(sensor.column.label() == "column 3");
  CHECK(sensor.travel_m(3900.0) == Approx(0.0).margin(1e-15));
  CHECK(sensor.travel_m(2000.0) == Approx(0.031).epsilon(1e-15));
  CHECK(sensor.travel_m(180.0) == Approx(0.060).epsilon(1e-15));
}

TEST_CASE("trade units are converted by NIST SP 811", "[bike]") {
  // NIST SP 811 (2008), appendix B.9: psi 6.894757 kPa, lb 0.45359237 kg, lbf/in 175.1268 N/m;
  // tolerances half a unit of the last printed digit.
  const auto air = std::get<bike::AirSpring>(larch().rear->spring->kind);
  CHECK(air.pressure_pa / 160.0 == Approx(6894.757).margin(5e-4));
  const auto pounds = parse_bike(replaced(replaced(larch_text, "mass_kg = 78.0", "mass_lb = 172.0"),
                                          "kind = \"air\"\narea_mm2 = 1100.0\nvolume_mm3 = "
                                          "130000.0\npressure_psi = 160.0\nexponent = 1.25",
                                          "kind = \"coil\"\nrate_lb_in = 450.0"),
                                 "larch.toml");
  CHECK(*pounds.rider_mass_kg == Approx(172.0 * 0.45359237).epsilon(1e-15));
  CHECK(std::get<bike::CoilSpring>(pounds.rear->spring->kind).rate_n_m / 450.0 ==
        Approx(175.1268).margin(5e-5));
}

TEST_CASE("sprung mass is rider and chassis less the unsprung masses, shared", "[bike]") {
  const bike::Bike b = larch();
  const double sprung = 78.0 + 16.2 - 2.9 - 4.1;
  CHECK(*b.sprung_mass_kg(bike::EndName::front) == Approx(0.42 * sprung).epsilon(1e-14));
  CHECK(*b.sprung_mass_kg(bike::EndName::rear) == Approx(0.58 * sprung).epsilon(1e-14));
  const auto without = parse_bike(replaced(larch_text, "unsprung_mass_kg = 4.1\n", ""), "l.toml");
  CHECK(!without.sprung_mass_kg(bike::EndName::front));
}

TEST_CASE("the minimal file reads, and is told what more would bring", "[bike]") {
  const bike::Bike b = parse_bike(minimal_bike_text, "dir/larch.toml");
  CHECK(b.name == "larch");
  CHECK(!b.rear);
  CHECK(b.front->bottom_out_within_m == 0.004);
  CHECK(b.front->ratio(0.1) == 1.0);
  std::string all;
  for (const std::string& sentence : bike::what_is_missing(b)) all += sentence + "\n";
  for (const char* key : {"front.split", "front.damper", "front.spring", "front.unsprung_mass_kg",
                          "rider.mass_kg", "front.tyre", "log.speed", "[rear]"})
    CHECK_THAT(all, Contains(key));
  CHECK_THAT(all, !Contains("rear.damper"));
}

TEST_CASE("an accelerometer on the sprung side is read, up where nothing is said", "[bike]") {
  const bike::SprungAccel down = *larch().front->sprung_accel;
  CHECK(down.column.name == "fork_az");
  CHECK(down.m_s2_per_unit() == -1.0);
  const auto up = parse_bike(replaced(larch_text, "unit = \"m/s2\", up = -1", "unit = \"g\""), "l");
  CHECK(up.front->sprung_accel->m_s2_per_unit() == 9.80665);
  CHECK(!up.rear->sprung_accel);
  const auto massless = parse_bike(replaced(larch_text, "mass_kg = 78.0", ""), "l");
  const auto missing = bike::what_is_missing(massless);
  CHECK(std::any_of(missing.begin(), missing.end(), [](const std::string& sentence) {
    return sentence.starts_with("front.sprung_accel is weighed against");
  }));
}

TEST_CASE("what a whole file leaves out is only what it leaves out", "[bike]") {
  std::string all;
  for (const std::string& sentence : bike::what_is_missing(larch())) all += sentence + "\n";
  CHECK_THAT(all, Contains("rear.tyre") && Contains("rear.damper is assumed") &&
                      Contains("rear.sprung_accel"));
  CHECK_THAT(all, !Contains("front.") && !Contains("rider") && !Contains("log."));
}

TEST_CASE("an assumed damper is read with what the rider counts", "[bike]") {
  const auto b = larch();
  const auto& assumed = std::get<bike::AssumedDamper>(*b.rear->damper);
  CHECK(assumed.bleed_compression->clicks == 16);
  CHECK(assumed.valve_compression->setting == 6);
  CHECK(assumed.bleed_rebound->clicks == 18);
  CHECK(!assumed.valve_rebound);
}

TEST_CASE("adjuster and end names go there and back", "[bike]") {
  for (const bike::Adjuster adjuster : bike::all_adjusters)
    CHECK(bike::adjuster_from(to_string(adjuster)) == adjuster);
  CHECK(!bike::adjuster_from("low_speed_rebounds"));
  CHECK(words(bike::Adjuster::high_speed_rebound) == "high-speed rebound");
  CHECK(to_string(bike::EndName::rear) == "rear");
  CHECK(part(bike::EndName::front) == "fork");
}

TEST_CASE("a damaged bike file reads or is refused with its name, and never crashes", "[bike]") {
  std::mt19937 random(11);
  const std::string digits = "0123456789.-enaif[]{}\"=\n";
  int refused = 0;
  for (int round = 0; round < 3000; ++round) {
    std::string text = larch_text;
    for (int hit = 0; hit < 2; ++hit)
      text[random() % text.size()] = digits[random() % digits.size()];
    try {
      const auto b = parse_bike(text, "larch.toml");
      for (const auto& end : {b.front, b.rear})
        if (end && end->spring)
          CHECK(std::isfinite(bike::spring_force_n(*end->spring, end->stroke_m, end->stroke_m)));
    } catch (const core::InputError& error) {
      ++refused;
      CHECK(error.place().file == "larch.toml");
    }
  }
  CHECK(refused > 0);
}
