#include "clickwise/bike/spring.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "clickwise/core/units.hpp"

using namespace clickwise;
using namespace clickwise::bike;

namespace {

// Check values 4i and 4j: 10 bar absolute in 200 cm^3 under 8 cm^2 (gauge pressure is what the
// bike file holds).
constexpr double stroke_m = 0.2;
Spring air(double exponent) {
  return {AirSpring{8e-4, 200e-6, 1e6 - core::standard_atmosphere_pa, exponent}, std::nullopt};
}

End end_with(Spring spring, core::Polyline ratio) {
  End end;
  end.stroke_m = stroke_m;
  end.ratio = std::move(ratio);
  end.spring = std::move(spring);
  return end;
}

// Trapezoids of the force: O(h^2), here below 1e-7 of the sum.
double summed_energy_j(const Spring& spring, double to_m) {
  constexpr int steps = 20000;
  double sum = 0.0;
  for (int i = 0; i < steps; ++i)
    sum += 0.5 * (spring_force_n(spring, to_m * i / steps, stroke_m) +
                  spring_force_n(spring, to_m * (i + 1) / steps, stroke_m));
  return sum * to_m / steps;
}

}  // namespace

TEST_CASE("an air spring follows p V^n: force and rate", "[bike]") {
  // Polytropic gas law, n = 1, 1.2, 1.4, at 100 mm; figures to 7 digits.
  const double n[] = {1.0, 1.2, 1.4};
  const double force_n[] = {1252.2733, 1395.6951, 1554.5443};
  const double rate_n_m[] = {8888.8889, 11814.0410, 15265.6399};
  for (int i = 0; i < 3; ++i) {
    CHECK(spring_force_n(air(n[i]), 0.1, stroke_m) == Approx(force_n[i]).epsilon(1e-7));
    CHECK(spring_rate_n_m(air(n[i]), 0.1, stroke_m) == Approx(rate_n_m[i]).epsilon(1e-7));
  }
}

TEST_CASE("an air spring's energy is the gas work less that of the atmosphere", "[bike]") {
  // Polytropic work to 150 mm, absolute, n = 1, 1.2, 1.4; figures to 10 digits.
  const double n[] = {1.0, 1.2, 1.4};
  const double gas_work_j[] = {183.2581464, 201.1244340, 221.3499530};
  const double atmosphere_j = core::standard_atmosphere_pa * 8e-4 * 0.15;
  for (int i = 0; i < 3; ++i)
    CHECK(spring_energy_j(air(n[i]), 0.15, stroke_m) + atmosphere_j ==
          Approx(gas_work_j[i]).epsilon(1e-7));
}

TEST_CASE("an exponent that is nearly 1 gives nearly the isothermal energy", "[bike]") {
  const double isothermal = spring_energy_j(air(1.0), 0.15, stroke_m);
  for (const double n : {1.0 + 1e-13, 1.0 + 1e-9, 1.0 + 1e-6})
    CHECK(spring_energy_j(air(n), 0.15, stroke_m) == Approx(isothermal).epsilon(2e-6));
}

TEST_CASE("rate and energy are derivative and integral of the force, bumper included", "[bike]") {
  const Bumper bumper{0.02, 2500.0};
  const std::vector<Spring> springs{
      {CoilSpring{40e3, 0.003}, bumper},
      {AirSpring{8e-4, 200e-6, 9e5, 1.3}, bumper},
      {TableSpring{core::Polyline({0.0, 0.04, 0.12, 0.2}, {90, 300, 760, 1800})}, bumper}};
  const double h = 1e-6;
  for (const Spring& spring : springs) {
    for (const double x : {0.03, 0.1, 0.185, 0.195}) {
      const double difference =
          (spring_force_n(spring, x + h, stroke_m) - spring_force_n(spring, x - h, stroke_m)) /
          (2.0 * h);
      CHECK(spring_rate_n_m(spring, x, stroke_m) == Approx(difference).epsilon(1e-6));
      CHECK(spring_energy_j(spring, x, stroke_m) ==
            Approx(summed_energy_j(spring, x)).epsilon(1e-7));
    }
  }
}

TEST_CASE("a bumper adds nothing before it is met and its end force at the stroke", "[bike]") {
  const Spring bare{CoilSpring{40e3, 0.0}, std::nullopt};
  const Spring with{CoilSpring{40e3, 0.0}, Bumper{0.02, 2500.0}};
  CHECK(spring_force_n(with, 0.18, stroke_m) == spring_force_n(bare, 0.18, stroke_m));
  CHECK(spring_force_n(with, 0.19, stroke_m) - spring_force_n(bare, 0.19, stroke_m) ==
        Approx(625.0).epsilon(1e-9));
  CHECK(spring_force_n(with, stroke_m, stroke_m) == Approx(8000.0 + 2500.0).epsilon(1e-12));
}

TEST_CASE("travel past the stroke, or above full extension, is not the spring's", "[bike]") {
  const Spring spring = air(1.4);
  CHECK(spring_force_n(spring, 0.3, stroke_m) == spring_force_n(spring, stroke_m, stroke_m));
  CHECK(spring_force_n(spring, -0.01, stroke_m) == spring_force_n(spring, 0.0, stroke_m));
  CHECK(std::isnan(spring_force_n(spring, std::nan(""), stroke_m)));
}

TEST_CASE("equilibrium balances the wheel's load through the ratio", "[bike]") {
  const Spring coil{CoilSpring{90e3, 0.002}, std::nullopt};
  const End end = end_with(coil, core::Polyline({0.0, 0.2}, {3.0, 2.4}));
  const double load_n = 800.0;
  const double x = equilibrium_travel_m(end, load_n);
  CHECK(spring_force_n(coil, x, stroke_m) == Approx(load_n * end.ratio(x)).epsilon(1e-10));
  CHECK(equilibrium_travel_m(end, 50.0) == 0.0);
  CHECK(equilibrium_travel_m(end, 1e6) == stroke_m);
}

TEST_CASE("wheel travel is the integral of the ratio, and the ratio its slope", "[bike]") {
  const End end = end_with(air(1.3), core::Polyline({0.05, 0.2}, {3.0, 2.4}));
  CHECK(wheel_travel_m(end, 0.0) == 0.0);
  // The ratio runs straight from 3.2 at 0 to 2.4 at 0.2 m: mean 2.8.
  CHECK(wheel_travel_m(end, 0.2) == Approx(2.8 * 0.2).epsilon(1e-14));
  const double h = 1e-6;
  CHECK((wheel_travel_m(end, 0.1 + h) - wheel_travel_m(end, 0.1 - h)) / (2 * h) ==
        Approx(end.ratio(0.1)).epsilon(1e-8));
}

TEST_CASE("a constant ratio makes the wheel rate k over the ratio squared", "[bike]") {
  // Virtual work; Milliken and Milliken, Race Car Vehicle Dynamics, ch. 16 (chapter from memory).
  const End end = end_with({CoilSpring{90e3, 0.0}, std::nullopt}, core::Polyline::constant(2.5));
  CHECK(wheel_rate_n_m(end, 0.05) == Approx(14.4e3).epsilon(1e-12));
}

TEST_CASE("with a changing ratio the wheel rate is the slope of the wheel force", "[bike]") {
  const End end = end_with(air(1.3), core::Polyline({0.0, 0.2}, {3.0, 2.4}));
  const auto wheel_force = [&](double x) {
    return spring_force_n(*end.spring, x, stroke_m) / end.ratio(x);
  };
  const double h = 1e-6;
  const double slope = (wheel_force(0.1 + h) - wheel_force(0.1 - h)) /
                       (wheel_travel_m(end, 0.1 + h) - wheel_travel_m(end, 0.1 - h));
  CHECK(wheel_rate_n_m(end, 0.1) == Approx(slope).epsilon(1e-6));
}

TEST_CASE("natural frequency and critical damping of one mass on one spring", "[bike]") {
  // m = 20 kg, k = 9000 N/m: closed forms.
  CHECK(natural_frequency_hz(9000.0, 20.0) == Approx(3.3761861856).epsilon(1e-9));
  CHECK(critical_damping_n_s_m(9000.0, 20.0) == Approx(848.5281374).epsilon(1e-9));
}

TEST_CASE("sag gives the frequency of a straight spring", "[bike]") {
  // f = sqrt(g / d) / (2 pi); figures to 9 digits.
  const double sag_m[] = {0.010, 0.025, 0.050, 0.250};
  const double hertz[] = {4.98402795, 3.15217605, 2.22892506, 0.99680559};
  constexpr double mass_kg = 40.0;
  const double load_n = mass_kg * core::standard_gravity_m_s2;
  for (int i = 0; i < 4; ++i) {
    End end;
    end.stroke_m = 0.3;
    end.spring = Spring{CoilSpring{load_n / sag_m[i], 0.0}, std::nullopt};
    CHECK(equilibrium_travel_m(end, load_n) == Approx(sag_m[i]).epsilon(1e-12));
    CHECK(natural_frequency_hz(wheel_rate_n_m(end, sag_m[i]), mass_kg) ==
          Approx(hertz[i]).epsilon(1e-8));
  }
}

TEST_CASE("springs in series, as a tyre under a spring", "[bike]") {
  // Gillespie, Fundamentals of Vehicle Dynamics, ch. 5 (chapter from memory): ride rate.
  CHECK(rate_in_series_n_m(20e3, 200e3) == Approx(18.18181818e3).epsilon(1e-9));
}
