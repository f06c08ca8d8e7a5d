#include "clickwise/events/end_stops.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <numbers>
#include <stdexcept>
#include <vector>

#include "support/ride_of_waves.hpp"

namespace events = clickwise::events;
namespace run = clickwise::run;
using test_support::all_counted;
using test_support::noise_band;
using test_support::sampled;
using test_support::WaveRide;

namespace {

// Straight travel between the points (mm over samples at 100 Hz), velocity by central difference.
run::Motion motion_of(const std::vector<double>& travel_mm) {
  run::Motion motion;
  motion.time = {0.0, 100.0, travel_mm.size()};
  const auto n = travel_mm.size();
  for (std::size_t i = 0; i < n; ++i) {
    const std::size_t before = i == 0 ? 0 : i - 1, after = i + 1 == n ? i : i + 1;
    motion.travel_m.push_back(travel_mm[i] * 1e-3);
    motion.velocity_m_s.push_back((travel_mm[after] - travel_mm[before]) * 1e-3 * 100.0 /
                                  static_cast<double>(after - before));
  }
  motion.valid.assign(n, 1);
  return motion;
}

const events::BottomOutOptions larch_fork{.stroke_m = 0.100,
                                          .within_m = 0.004};  // line 96, rearm 84 mm

}  // namespace

TEST_CASE("a bottom-out has the speed and moment of the crossing between samples", "[events]") {
  // 2 m/s is 20 mm a sample at 100 Hz: 90 to 110 crosses 96 after 0.3 of a sample.
  const auto motion = motion_of({50, 70, 90, 110, 130, 60, 50});
  const auto found = events::bottom_outs(motion, all_counted(motion), larch_fork);
  REQUIRE(found.size() == 1);
  CHECK(found[0].t_s == Approx(0.02 + 0.003).epsilon(1e-9));
  CHECK(found[0].closing_speed_m_s == Approx(2.0).epsilon(1e-9));
  CHECK(found[0].depth_m >= 0.130);
  CHECK(found[0].energy_left_j == 0.0);
}

TEST_CASE("closing speeds on a sampled sinusoid are those of the formula", "[events]") {
  const auto rate_hz = GENERATE(200.0, 1000.0);
  CAPTURE(rate_hz);
  // x = 60 + 45 sin(2 pi 3 t): crosses 96 mm where the sine is 0.8, so v = 45 (6 pi) 0.6 mm/s.
  const WaveRide ride{.mean_m = 0.060, .waves = {{0.045, 3.0, 0.0}}, .hits = {}};
  const auto motion = sampled(ride, rate_hz, 10.0);
  auto options = larch_fork;
  options.moving_mass_kg = 40.0;
  const auto found = events::bottom_outs(motion, all_counted(motion), options);
  REQUIRE(found.size() == 30);
  const double speed = 0.045 * 6.0 * std::numbers::pi * 0.6;
  // Cubic through travel and velocity: error of the slope within (w h)^3 of the peak speed.
  const double tolerance = 0.85 * std::pow(6.0 * std::numbers::pi / rate_hz, 3);
  for (const auto& event : found) {
    CHECK(event.closing_speed_m_s == Approx(speed).margin(tolerance));
    CHECK(event.depth_m == Approx(0.105).margin(1e-6));
    CHECK(event.energy_left_j == Approx(20.0 * speed * speed).margin(40.0 * tolerance));
  }
  CHECK(found[0].t_s == Approx(std::asin(0.8) / (6.0 * std::numbers::pi)).margin(1e-5));
}

TEST_CASE("a bounce inside one excursion is not counted twice", "[events]") {
  const auto bounce = motion_of({50, 80, 98, 90, 85, 97, 99.5, 85, 60, 50, 80, 97, 60});
  const auto found = events::bottom_outs(bounce, all_counted(bounce), larch_fork);
  REQUIRE(found.size() == 2);
  CHECK(found[0].depth_m >= 0.0995);  // the second, deeper touch belongs to the first event
  const auto fell = motion_of({50, 80, 98, 90, 83.9, 97, 99.5, 85, 60});
  CHECK(events::bottom_outs(fell, all_counted(fell), larch_fork).size() == 2);
}

TEST_CASE("a wide margin lowers the line that arms again", "[events]") {
  // within 10: line 90, rearm 60 (4 within), so a return to 70 does not arm.
  const auto motion = motion_of({50, 80, 95, 70, 95, 50, 95, 50});
  const events::BottomOutOptions wide{.stroke_m = 0.100, .within_m = 0.010};
  CHECK(events::bottom_outs(motion, all_counted(motion), wide).size() == 2);
}

TEST_CASE("a peak between two samples that both lie below the line counts", "[events]") {
  const WaveRide ride{.mean_m = 0.050, .waves = {{0.0465, 10.0, 0.0}}, .hits = {}};
  const auto motion = sampled(ride, 100.0, 0.095);
  double largest = 0.0;
  for (const double x : motion.travel_m) largest = std::max(largest, x);
  REQUIRE(largest < 0.096);
  CHECK(events::bottom_outs(motion, all_counted(motion), larch_fork).size() == 1);
}

TEST_CASE("no crossing is read into masked time", "[events]") {
  const auto motion = motion_of({50, 80, 98, 99, 90, 60, 50, 80, 98, 60, 50});
  auto counted = all_counted(motion);
  SECTION("masked while it crosses: no event, and the next one counts") {
    counted[1] = counted[2] = 0;
    const auto found = events::bottom_outs(motion, counted, larch_fork);
    REQUIRE(found.size() == 1);
    CHECK(found[0].t_s > 0.06);
  }
  SECTION("masked at its deepest: one event, not two") {
    counted[3] = 0;
    CHECK(events::bottom_outs(motion, counted, larch_fork).size() == 2);
  }
  SECTION("a record that begins beyond the line has no crossing") {
    counted[0] = counted[1] = 0;
    CHECK(events::bottom_outs(motion, counted, larch_fork).size() == 1);
  }
  SECTION("NaN is masked, whatever the mask says") {
    auto hole = motion;
    hole.travel_m[2] = std::numeric_limits<double>::quiet_NaN();
    CHECK(events::bottom_outs(hole, counted, larch_fork).size() == 1);
  }
}

TEST_CASE("an empty motion has no events, and options out of range are refused", "[events]") {
  const run::Motion none;
  CHECK(events::bottom_outs(none, {}, larch_fork).empty());
  CHECK(events::top_outs(none, {}).empty());
  CHECK_THROWS_AS(events::bottom_outs(none, {}, {.stroke_m = 0.0}), std::invalid_argument);
  CHECK_THROWS_AS(events::bottom_outs(none, {}, {.stroke_m = 0.1, .within_m = -1.0}),
                  std::invalid_argument);
  const std::vector<std::uint8_t> one{1};
  CHECK_THROWS_AS(events::bottom_outs(none, one, larch_fork), std::invalid_argument);
}

TEST_CASE("a top-out is the mirror image, and a soft arrival is none", "[events]") {
  const auto hard = motion_of({50, 30, 10, -1, -1, 2, 30, 50});
  const auto found = events::top_outs(hard, all_counted(hard));
  REQUIRE(found.size() == 1);
  CHECK(found[0].closing_speed_m_s < -0.5);
  CHECK(found[0].depth_m <= -0.001);
  const auto soft = motion_of({10, 8, 6, 5, 4, 3.5, 3.1, 2.8, 2.6, 2.5, 2.5});
  CHECK(events::top_outs(soft, all_counted(soft)).empty());
}

// Check-values 1.3d to 1.3f: S. O. Rice, Bell Syst. Tech. J. 23:282-332 (1944) and 24:46-156
// (1945). Counts of a Gaussian process: tolerance 4 / sqrt(count) relative.
TEST_CASE("up-crossings of Gaussian motion are as frequent as Rice's formula says", "[events]") {
  const double rms_m = 10.0;  // so large that the 15 mm of hysteresis are nothing
  const double duration_s = 400.0;
  const auto rate_at = [&](const std::vector<test_support::Wave>& waves, double level_m) {
    const auto motion = sampled({.mean_m = 0.0, .waves = waves, .hits = {}}, 200.0, duration_s);
    const events::BottomOutOptions options{.stroke_m = level_m + 1e-3, .within_m = 1e-3};
    return static_cast<double>(events::bottom_outs(motion, all_counted(motion), options).size()) /
           duration_s;
  };
  const auto tolerance = [&](double rate) { return 4.0 * std::sqrt(rate / duration_s); };
  const auto low_pass = noise_band(0.0, 8.0, rms_m, 400, 4);
  const double zero_rate = 8.0 / std::sqrt(3.0);
  CHECK(rate_at(low_pass, 0.0) == Approx(zero_rate).margin(tolerance(zero_rate)));
  CHECK(rate_at(low_pass, 2.0 * rms_m) ==
        Approx(zero_rate * 0.1353352832).margin(tolerance(zero_rate * 0.1353352832)));
  const auto band = noise_band(1.0, 20.0, rms_m, 400, 6);
  CHECK(rate_at(band, 0.0) == Approx(11.84623710).margin(tolerance(11.8)));
}
