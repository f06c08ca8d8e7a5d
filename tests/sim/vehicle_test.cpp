#include "clickwise/sim/vehicle.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <complex>
#include <vector>

#include "linear_end.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using clickwise::sim_test::linear_end;
using clickwise::sim_test::LinearParts;
using clickwise::sim_test::one_degree;

namespace {

constexpr double pi = std::numbers::pi;
constexpr double gravity = core::standard_gravity_m_s2;

// Overshoot of the sprung mass past rest, as a share of how far it was moved, and when.
struct Overshoot {
  double share;
  double t_s;
};

Overshoot overshoot_of(const VehicleEnd& end, double step_s) {
  constexpr double pull_m = 0.02;
  const EndState rest = at_rest(end, 0.0);
  EndState state = rest;
  state.sprung_m += pull_m;
  Overshoot found{0.0, 0.0};
  for (int i = 1; i < static_cast<int>(2.0 / step_s); ++i) {
    step(end, state, {}, step_s);
    const double share = (rest.sprung_m - state.sprung_m) / pull_m;
    if (share > found.share) found = {share, step_s * i};
  }
  return found;
}

// Amplitude of the steady sprung motion over that of a ground sine.
// The step is trimmed to a whole number a period.
double transmissibility(const VehicleEnd& end, double frequency_hz, double about_step_s) {
  constexpr double amplitude_m = 0.5e-3;
  const double w = 2.0 * pi * frequency_hz;
  const auto per_period = static_cast<int>(std::lround(1.0 / (frequency_hz * about_step_s)));
  const double step_s = 1.0 / (frequency_hz * per_period);
  EndState state = at_rest(end, 0.0);
  const double middle = state.sprung_m;
  std::complex<double> sum = 0.0;
  const int settle = static_cast<int>(std::ceil(10.0 * frequency_hz));  // the body's decay: 10 s
  for (int i = 1; i <= (settle + 1) * per_period; ++i) {
    const double t = step_s * i;
    step(end, state, {amplitude_m * std::sin(w * t), amplitude_m * w * std::cos(w * t)}, step_s);
    if (i > settle * per_period)
      sum += (state.sprung_m - middle) * std::exp(std::complex<double>(0.0, -w * t));
  }
  return 2.0 * std::abs(sum) / per_period / amplitude_m;
}

// Two linear masses on a base: sprung over ground, textbook algebra.
double two_mass_transmissibility(const LinearParts& p, double frequency_hz) {
  const std::complex<double> s(0.0, 2.0 * pi * frequency_hz);
  const auto suspension = p.stiffness_n_m + s * p.damping_n_s_m;
  const auto tyre = p.tyre_n_m + s * p.tyre_n_s_m;
  const auto sprung = p.sprung_kg * s * s + suspension;
  const auto wheel = p.unsprung_kg * s * s + suspension + tyre;
  return std::abs(suspension * tyre / (sprung * wheel - suspension * suspension));
}

double landing_travel(double step_s) {
  LinearParts parts;
  parts.unsprung_kg = 3.0;
  const VehicleEnd end = linear_end(parts);
  EndState state = at_rest(end, 0.0);
  state.wheel_m_s = state.sprung_m_s = -1.0;
  for (int i = 0; i < static_cast<int>(std::lround(0.1 / step_s)); ++i)
    step(end, state, {}, step_s);
  return state.wheel_m - state.sprung_m;
}

}  // namespace

// Check values 1.4: overshoot and peak time of a second-order system (Ogata, Modern Control
// Engineering, transient response). The wheel's give: (k/k_t) = 3e-4; first-order step: h wn/2 =
// 3e-4 at 25 us, and the damper's lag. Tolerance rel 3e-3.
TEST_CASE("free decay overshoots and peaks as a second-order system does", "[sim]") {
  struct Row {
    double ratio, overshoot, peak_wn;
  };
  const auto row = GENERATE(Row{0.1, 0.72924761, 3.157419}, Row{0.3, 0.37232610, 3.293284},
                            Row{0.5, 0.16303353, 3.627599});
  const double wn = 2.0 * pi * 2.0;
  const Overshoot found = overshoot_of(linear_end(one_degree(2.0, row.ratio)), 2.5e-5);
  CHECK(found.share == Approx(row.overshoot).epsilon(3e-3));
  CHECK(found.t_s * wn == Approx(row.peak_wn).epsilon(3e-3));
}

TEST_CASE("at rest the spring carries the sprung weight and the tyre all of it", "[sim]") {
  LinearParts parts;
  const VehicleEnd end = linear_end(parts);
  EndState state = at_rest(end, 0.3);
  CHECK(state.wheel_m - state.sprung_m == Approx(0.2).margin(1e-9));
  const double weight = (parts.sprung_kg + parts.unsprung_kg) * gravity;
  CHECK(0.3 - state.wheel_m == Approx(weight / parts.tyre_n_m).epsilon(1e-9));
  const EndState before = state;
  for (int i = 0; i < 10000; ++i) step(end, state, {.height_m = 0.3}, 1e-4);
  CHECK(std::abs(state.sprung_m - before.sprung_m) < 1e-9);
}

// Check values 1.4d (base motion): at sqrt2 times the natural frequency every damping passes 1, at
// resonance sqrt(1 + 4 z^2) / (2 z).
TEST_CASE("transmissibility is 1 at sqrt 2 whatever the damping", "[sim]") {
  const double ratio = GENERATE(0.1, 0.3, 0.7);
  const VehicleEnd end = linear_end(one_degree(2.0, ratio));
  CHECK(transmissibility(end, 2.0 * std::sqrt(2.0), 2.5e-5) == Approx(1.0).epsilon(3e-3));
  const double at_resonance = std::sqrt(1.0 + 4.0 * ratio * ratio) / (2.0 * ratio);
  CHECK(transmissibility(end, 2.0, 2.5e-5) == Approx(at_resonance).epsilon(5e-3));
}

// Wheel hop: the whole linear model against its own algebra at, below and above the wheel's
// resonance sqrt((k + k_t) / m_u) / (2 pi). Lag of half a step: w h / 2 = 3e-3 at 25 us and 40 Hz.
TEST_CASE("the wheel hops where two linear masses say", "[sim]") {
  LinearParts parts;
  parts.unsprung_kg = 2.9;
  const VehicleEnd end = linear_end(parts);
  const double hop_hz =
      std::sqrt((parts.stiffness_n_m + parts.tyre_n_m) / parts.unsprung_kg) / (2.0 * pi);
  for (const double f : {0.25 * hop_hz, hop_hz, 1.5 * hop_hz})
    CHECK(transmissibility(end, f, 2.5e-5) ==
          Approx(two_mass_transmissibility(parts, f)).epsilon(6e-3));
}

TEST_CASE("halving the step halves the error", "[sim]") {
  const double fine = landing_travel(1e-6);
  const double coarse_error = std::abs(landing_travel(2e-4) - fine);
  const double half_error = std::abs(landing_travel(1e-4) - fine);
  CHECK(coarse_error / half_error == Approx(2.0).epsilon(0.1));
  CHECK(half_error < 1e-3 * fine);
}

namespace {

// Energy in less stored less lost, over a rough ride with stops, friction and airtime, as a share
// of what was lost.
double energy_gap(double step_s) {
  LinearParts parts;
  parts.unsprung_kg = 3.0;
  parts.friction_n = 20.0;
  const VehicleEnd end = linear_end(parts);
  EndState state = at_rest(end, 0.0);
  const double start = stored_j(end, state, 0.0);
  double in = 0.0;
  double lost = 0.0;
  Ground ground;
  for (int i = 0; i < static_cast<int>(std::lround(2.0 / step_s)); ++i) {
    const double t = step_s * (i + 0.5);
    const Ground before = ground;
    ground = {0.15 * std::sin(15.0 * t), 2.25 * std::cos(15.0 * t)};
    const double deflection = before.height_m - state.wheel_m;
    const auto out = step(end, state, before, step_s);
    in += out.tyre_n * (ground.height_m - before.height_m);
    const double elastic = parts.tyre_n_m * std::max(0.0, deflection);
    lost += (out.tyre_n - elastic) *
            ((ground.height_m - before.height_m) / step_s - state.wheel_m_s) * step_s;
    lost += (out.damper_n + out.friction_n) * out.velocity_m_s * step_s;
    const double past = std::max({0.0, out.travel_m - end.stroke_m, -out.travel_m});
    const double loss = std::abs(out.stop_n) - end.stop.stiffness_n_m * past;
    lost += past > 0.0 ? loss * std::copysign(out.velocity_m_s, out.travel_m) * step_s : 0.0;
  }
  return (in - (stored_j(end, state, ground.height_m) - start) - lost) / lost;
}

}  // namespace

TEST_CASE("energy in is stored or lost, to the order of the step", "[sim]") {
  const double coarse = std::abs(energy_gap(4e-5));
  const double fine = std::abs(energy_gap(1e-5));
  CHECK(fine < 2e-3);
  CHECK(fine < 0.5 * coarse);
}

TEST_CASE("the tyre never pulls, and in the air the end tops out", "[sim]") {
  const VehicleEnd end = linear_end({});
  EndState state = at_rest(end, 0.0);
  bool airborne = false;
  for (int i = 0; i < 20000; ++i) {
    const double t = 1e-4 * i;
    const auto out = step(end, state, {0.1 * std::sin(25.0 * t), 2.5 * std::cos(25.0 * t)}, 1e-4);
    REQUIRE(out.tyre_n >= 0.0);
    airborne = airborne || out.tyre_n == 0.0;
  }
  CHECK(airborne);
}

TEST_CASE("friction holds the shaft still below its breakaway and the damper takes no part",
          "[sim]") {
  LinearParts parts;
  parts.friction_n = 30.0;
  const VehicleEnd end = linear_end(parts);
  EndState state = at_rest(end, 0.0);
  state.sprung_m += 0.004;  // 24 N of spring, less than friction
  const double travel = state.wheel_m - state.sprung_m;
  EndOutput out;
  for (int i = 0; i < 20000; ++i) out = step(end, state, {}, 1e-4);
  CHECK(state.wheel_m - state.sprung_m == Approx(travel).margin(1e-12));
  CHECK(out.velocity_m_s == 0.0);
  CHECK(out.friction_n == Approx(24.0).margin(0.1));
  CHECK(out.damper_n == 0.0);
}

TEST_CASE("the implicit speed solves its equation below, at and above the knee", "[sim]") {
  const damper::Law law =
      GENERATE(damper::Law{0.08, 380.0, 180.0, 22.0}, damper::Law{0.0, 300.0, 500.0, 0.0},
               damper::Law{0.2, 0.0, 0.0, 50.0}, damper::Law{0.012, 620.0, 180.0, 300.0});
  for (const double gain : {1e-6, 1e-4, 1e-2})
    for (const double pressure_n : {1.0, 250.0, 380.0, 381.0, 900.0, 4000.0}) {
      const double s = std::sqrt(pressure_n);
      double v = 0.1 * law.bleed_m_s * s;
      if (law.has_valve()) v += std::max(0.0, pressure_n - law.opening_n) / law.slope_n_s_m;
      const double force = pressure_n + law.port_n_s2_m2 * v * v;
      CHECK(implicit_speed_m_s(law, gain, v + gain * force) ==
            Approx(v).epsilon(1e-8).margin(1e-14));
    }
}

TEST_CASE("a platform holds still until its opening force", "[sim]") {
  const damper::Law platform{0.0, 300.0, 500.0, 0.0};
  CHECK(implicit_speed_m_s(platform, 1e-4, 299.0e-4) == 0.0);
  CHECK(implicit_speed_m_s(platform, 1e-4, 350.0e-4) == Approx(50e-4 / (500e-4 + 1.0)));
}

TEST_CASE("a linkage changes force and speed at the wheel and keeps the energy", "[sim]") {
  const core::Polyline ratio({0.0, 0.065}, {3.0, 2.4});
  const WheelTable table(0.065, ratio, [](double x) { return 4e4 * x; });
  CHECK(table.wheel_travel_m == Approx(0.065 * 2.7));
  const double x = 0.03;
  const double r = ratio(x);
  const auto node = table.at(ratio.integral(x));
  CHECK(node.shaft_m == Approx(x).margin(1e-7));
  CHECK(node.inverse_ratio == Approx(1.0 / r).epsilon(1e-5));
  CHECK(node.spring_n == Approx(4e4 * x / r).margin(0.1));
  CHECK(table.stored_j(ratio.integral(x)) == Approx(0.5 * 4e4 * x * x).epsilon(1e-5));
}

TEST_CASE("a metal end stop pushes only and gives back less than it took", "[sim]") {
  LinearParts parts;
  const VehicleEnd end = linear_end(parts);
  EndState state = at_rest(end, 0.0);
  state.sprung_m_s = -6.0;
  double deepest = 0.0;
  for (int i = 0; i < 3000; ++i) {
    const auto out = step(end, state, {}, 1e-4);
    REQUIRE(out.stop_n * (out.travel_m - 0.2) >= 0.0);
    deepest = std::max(deepest, out.travel_m);
  }
  CHECK(deepest > 0.4);
  CHECK(deepest < 0.405);
}
