// The hydraulic law against fluid mechanics and closed-form energies, as its special cases.
#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "clickwise/damper/law.hpp"

using clickwise::damper::Curve;
using clickwise::damper::Law;

namespace {

constexpr double pi = std::numbers::pi;
constexpr double infinite = std::numeric_limits<double>::infinity();

// Work over one cycle of x = A sin(w t), A = 50 mm, 2 Hz. The midpoint rule over whole periods of a
// smooth F converges faster than any power; with |v|'s corners at v = 0 its error is O(1/n^2).
constexpr double A = 0.05;
constexpr double w = 2.0 * pi * 2.0;
double energy_per_cycle_j(const Curve& curve) {
  constexpr int n = 200000;
  double sum = 0.0;
  for (int i = 0; i < n; ++i) {
    const double v = A * w * std::cos(2.0 * pi * (i + 0.5) / n);
    sum += curve.force_n(v) * v;
  }
  return sum * (2.0 * pi / w) / n;
}
Curve both(const Law& law) {
  return {law, law, false};
}

const Law linear{.opening_n = 0.0, .slope_n_s_m = 1500.0};
const Law quadratic{.bleed_m_s = infinite, .port_n_s2_m2 = 800.0};

// Orifice flow, Bernoulli: F = rho A_p^3 v^2 / (2 C_d^2 A^2).
constexpr double rho = 870.0;
constexpr double discharge = 0.62;
double piston_m2() {
  return pi / 4.0 * (0.025 * 0.025 - 0.0125 * 0.0125);
}
double orifice_n_s2_m2(double hole_m2) {
  return rho * std::pow(piston_m2(), 3) / (2.0 * std::pow(discharge * hole_m2, 2));
}
Law bleed_of(double hole_m2) {
  return {.bleed_m_s = std::sqrt(100.0 / orifice_n_s2_m2(hole_m2))};
}

}  // namespace

TEST_CASE("a bleed sized as an orifice gives the orifice's force", "[damper]") {
  // Bernoulli; oil 870 kg/m^3, C_d 0.62, hole 2 mm, piston 25 mm, rod 12.5 mm: 5721.364526 N s2/m2.
  // C_d of a sharp edge lies between 0.58 and 0.66 (Rabie, Fluid Power Engineering, 2009, p. 27).
  const double hole_m2 = pi / 4.0 * 0.002 * 0.002;
  const Law bleed = bleed_of(hole_m2);
  CHECK(bleed.force_n(0.05) == Approx(14.30341).epsilon(1e-6));
  CHECK(bleed.force_n(0.5) == Approx(1430.34113).epsilon(1e-6));
  CHECK(bleed.force_n(1.0) == Approx(5721.364526).epsilon(1e-6));
  const Law port{.bleed_m_s = infinite, .port_n_s2_m2 = 5721.364526};
  CHECK(port.force_n(0.5) == Approx(bleed.force_n(0.5)).epsilon(1e-9));
}

TEST_CASE("a laminar bleed is a valve without preload", "[damper]") {
  // Hagen-Poiseuille, dp / Q = 8 mu L / (pi R^4) = 1.1815662975e10 Pa s/m^3 for mu 14.5 mPa s,
  // L 20 mm, R 0.5 mm: a force in proportion to speed, which the law has as S with F_o = 0.
  const double resistance = 8.0 * 0.0145 * 0.020 / (pi * std::pow(0.5e-3, 4));
  CHECK(resistance == Approx(1.1815662975e10).epsilon(1e-8));
  const Law laminar{.opening_n = 0.0, .slope_n_s_m = resistance * piston_m2() * piston_m2()};
  const double v = 0.03;
  const double pressure_pa = resistance * piston_m2() * v;
  CHECK(laminar.force_n(v) == Approx(pressure_pa * piston_m2()).epsilon(1e-13));
  CHECK(laminar.force_n(2.0 * v) == Approx(2.0 * laminar.force_n(v)).epsilon(1e-13));
}

TEST_CASE("orifices side by side add their areas, one behind the other as the law's port",
          "[damper]") {
  // Bernoulli: 1 and 2 mm^2 are 3 mm^2 in parallel, 0.894427191 mm^2 in series.
  const Law one = bleed_of(1e-6);
  const Law two = bleed_of(2e-6);
  const Law parallel{.bleed_m_s = one.bleed_m_s + two.bleed_m_s};
  const Law series{.bleed_m_s = two.bleed_m_s, .port_n_s2_m2 = orifice_n_s2_m2(1e-6)};
  for (const double v : {0.02, 0.3, 2.0}) {
    CHECK(parallel.force_n(v) == Approx(bleed_of(3e-6).force_n(v)).epsilon(1e-9));
    CHECK(series.force_n(v) == Approx(bleed_of(0.894427191e-6).force_n(v)).epsilon(1e-9));
  }
}

TEST_CASE("energy per cycle of a linear, a constant and a quadratic damper", "[damper]") {
  // Den Hartog and Rao (from memory) and quadrature: pi c w A^2, 4 F A, (8/3) c_2 w^2 A^3.
  CHECK(energy_per_cycle_j(both(linear)) == Approx(148.0440660).epsilon(1e-6));
  // A platform that barely rises: F = 40 N within S v = 1e-6 N.
  const Law constant{.opening_n = 40.0, .slope_n_s_m = 1e-6};
  CHECK(energy_per_cycle_j(both(constant)) == Approx(8.0).epsilon(1e-6));
  CHECK(energy_per_cycle_j(both(quadratic)) == Approx(42.1103121).epsilon(1e-6));
  const Law bleed{.bleed_m_s = std::sqrt(100.0 / 800.0)};
  CHECK(energy_per_cycle_j(both(bleed)) == Approx(42.1103121).epsilon(1e-6));
}

TEST_CASE("the equivalent linear damper of equal energy per cycle", "[damper]") {
  // Equal energy: quadratic 8 c_2 V / (3 pi), constant 4 F / (pi V), V = A w.
  const auto equivalent = [](const Law& law) {
    return energy_per_cycle_j(both(law)) / (pi * w * A * A);
  };
  CHECK(equivalent(quadratic) == Approx(426.6666667).epsilon(1e-6));
  CHECK(equivalent({.opening_n = 40.0, .slope_n_s_m = 1e-6}) == Approx(81.0569469).epsilon(1e-6));
}

TEST_CASE("a power law between linear and constant keeps its energy within theirs", "[damper]") {
  // E = 2 sqrt(pi) G(p/2 + 1) / G((p + 3)/2) c w^p A^(p+1): p = 1 and p = 2 are the law's own.
  const auto energy = [](double p, double c) {
    return 2.0 * std::sqrt(pi) * std::tgamma(p / 2.0 + 1.0) / std::tgamma((p + 3.0) / 2.0) * c *
           std::pow(w, p) * std::pow(A, p + 1.0);
  };
  CHECK(energy(1.5, 1.0) == Approx(0.0716075312).epsilon(1e-6));
  CHECK(energy_per_cycle_j(both(linear)) == Approx(energy(1.0, 1500.0)).epsilon(1e-6));
  CHECK(energy_per_cycle_j(both(quadratic)) == Approx(energy(2.0, 800.0)).epsilon(1e-6));
}

TEST_CASE("compression and rebound each take half a cycle's work", "[damper]") {
  const double mixed = energy_per_cycle_j({linear, quadratic, false});
  CHECK(mixed == Approx(0.5 * (148.0440660 + 42.1103121)).epsilon(1e-6));
}
