#include "clickwise/sim/inverse.hpp"

#include <catch2/catch.hpp>

#include "clickwise/core/units.hpp"
#include "clickwise/sim/forward.hpp"
#include "linear_end.hpp"
#include "replay_rides.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using clickwise::sim_test::linear_end;
using clickwise::sim_test::LinearParts;

namespace {

// A ride over a rising sine, with its absolute heights.
struct Sine {
  std::vector<double> travel_m, velocity_m_s, ground_over_sprung_m, load_m_s2;
};

// Truth at `substeps` steps a millisecond; heights and loads as the mean over each.
Sine sine_ride(const VehicleEnd& end, double amplitude_m, double frequency_hz, double slope_m_s) {
  constexpr int substeps = 20;
  constexpr double h = 1e-3 / substeps;
  const double w = 2.0 * std::numbers::pi * frequency_hz;
  EndState state = at_rest(end, 0.0);
  state.sprung_m_s = state.wheel_m_s = slope_m_s;
  Sine ride;
  double sprung_before = state.sprung_m_s;
  for (int n = 0; n <= 3000 * substeps; ++n) {
    const double t = h * n;
    const Ground ground{amplitude_m * std::sin(w * t) + slope_m_s * t,
                        amplitude_m * w * std::cos(w * t) + slope_m_s};
    const auto out = step(end, state, ground, h);
    if (n % substeps != 0) continue;
    ride.travel_m.push_back(out.travel_m);
    ride.velocity_m_s.push_back(out.velocity_m_s);
    ride.ground_over_sprung_m.push_back(ground.height_m - state.sprung_m);
    ride.load_m_s2.push_back((state.sprung_m_s - sprung_before) / 1e-3 +
                             core::standard_gravity_m_s2);
    sprung_before = state.sprung_m_s;
  }
  return ride;
}

double rms_difference(const std::vector<double>& a, const std::vector<double>& b) {
  double sum = 0.0;
  for (std::size_t i = 0; i < a.size(); ++i) sum += std::pow(a[i] - b[i], 2);
  return std::sqrt(sum / static_cast<double>(a.size()));
}

}  // namespace

// Heights differ by the truth's first-order step and the half sample between the two schemes:
// 5 Hz, 15 mm: half a millisecond of 0.47 m/s is 0.24 mm.
TEST_CASE("the ground under a loaded tyre comes back", "[sim][replay]") {
  const VehicleEnd end = linear_end({.unsprung_kg = 3.0, .friction_n = 0.0});
  const Sine ride = sine_ride(end, 0.015, 5.0, 0.0);
  const Forcing forcing = recover_forcing(end, {1e-3, ride.travel_m, ride.velocity_m_s});
  REQUIRE(forcing.steps() == 3000);
  double worst_ground = 0.0, worst_load = 0.0;
  for (std::size_t n = 200; n < forcing.steps(); ++n) {
    CHECK(forcing.airborne[n] == 0);
    worst_ground =
        std::max(worst_ground, std::abs(forcing.ground_m[n] - ride.ground_over_sprung_m[n]));
    worst_load = std::max(worst_load, std::abs(forcing.load_m_s2[n] - ride.load_m_s2[n + 1]));
  }
  CHECK(worst_ground < 0.3e-3);
  CHECK(worst_load < 0.6);
}

// The frame moves with the sprung mass, so a hill is not in the forcing at all.
TEST_CASE("a steady climb changes nothing", "[sim][replay]") {
  const VehicleEnd end = linear_end({.unsprung_kg = 3.0});
  const Sine level = sine_ride(end, 0.015, 5.0, 0.0);
  const Sine hill = sine_ride(end, 0.015, 5.0, 2.0);
  const Forcing a = recover_forcing(end, {1e-3, level.travel_m, level.velocity_m_s});
  const Forcing b = recover_forcing(end, {1e-3, hill.travel_m, hill.velocity_m_s});
  for (std::size_t n = 0; n < a.steps(); n += 37)
    CHECK(a.ground_m[n] == Approx(b.ground_m[n]).margin(1e-6));
}

// Single precision of heights below 0.5 m: 3e-8 m, over the tyre's and wheel's few steps.
TEST_CASE("where nothing had to be guessed, the same settings give the ride back",
          "[sim][replay]") {
  for (const double step_s : {1e-3, 2.5e-4}) {
    const auto parts = replay_rides::fork();
    auto end = parts.vehicle();
    const Sine ride = sine_ride(end, 0.012, 4.0, 0.0);
    const Forcing forcing = recover_forcing(end, {1e-3, ride.travel_m, ride.velocity_m_s},
                                            {.longest_step_s = step_s, .still_m_s = 0.0});
    const Ridden again = ride_forward(end, forcing);
    REQUIRE(again.travel_m.size() == ride.travel_m.size());
    CHECK(rms_difference(again.travel_m, ride.travel_m) < 1e-6);
  }
}

TEST_CASE("friction and a platform give the ride back within their stick", "[sim][replay]") {
  auto parts = replay_rides::fork();
  parts.damper.compression.bleed.reset();
  parts.damper.compression.valve->open = parts.damper.compression.valve->closed = 120.0;
  parts.end.friction_n = 30.0;
  const VehicleEnd end = parts.vehicle();
  const Sine ride = sine_ride(end, 0.04, 3.0, 0.0);
  const Forcing forcing = recover_forcing(end, {1e-3, ride.travel_m, ride.velocity_m_s});
  const Ridden again = ride_forward(end, forcing);
  const double amplitude = *std::max_element(ride.travel_m.begin() + 1000, ride.travel_m.end()) -
                           *std::min_element(ride.travel_m.begin() + 1000, ride.travel_m.end());
  REQUIRE(amplitude > 0.02);
  CHECK(rms_difference(again.travel_m, ride.travel_m) < 0.01 * amplitude);
}

TEST_CASE("airtime is found as often as it is true, and its ground lies below the wheel",
          "[sim][replay]") {
  const auto ride = replay_rides::ride_number(2, 5, 20.0);
  const auto truth = ride.truth(ride.parts);
  const auto log = replay_rides::log_of(truth, ride.parts.end.stroke_m, 3);
  const VehicleEnd end = ride.parts.vehicle();
  const Forcing forcing = recover_forcing(end, {1e-3, log.travel_m, log.velocity_m_s});
  double agree = 0.0, airborne = 0.0;
  for (std::size_t n = 0; n < forcing.steps(); ++n) {
    agree += (forcing.airborne[n] != 0) == (truth.airborne[n] != 0);
    airborne += truth.airborne[n];
  }
  REQUIRE(airborne > 2000.0);
  CHECK(agree / static_cast<double>(forcing.steps()) > 0.97);
  for (std::size_t n = 0; n < forcing.steps(); n += 7)
    if (forcing.airborne[n] != 0) CHECK(forcing.ground_m[n] <= log.travel_m[n] + 1e-6);
}

TEST_CASE("a ride of a few samples has no steps", "[sim][replay]") {
  const VehicleEnd end = linear_end({});
  const std::vector<double> two{0.1, 0.1};
  CHECK(recover_forcing(end, {1e-3, two, two}).steps() == 0);
}
