#include "clickwise/bike/spring.hpp"

#include <cmath>
#include <numbers>

#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

constexpr double p_atm = core::standard_atmosphere_pa;

struct ForceRateEnergy {
  double force_n = 0.0;
  double rate_n_m = 0.0;
  double energy_j = 0.0;
};

ForceRateEnergy at(const CoilSpring& coil, double x) {
  return {coil.rate_n_m * (coil.preload_m + x), coil.rate_n_m,
          coil.rate_n_m * x * (coil.preload_m + 0.5 * x)};
}

// (e^u - 1) / u, 1 at u = 0
double expm1_over(double u) {
  return std::abs(u) < 1e-12 ? 1.0 : std::expm1(u) / u;
}

ForceRateEnergy at(const AirSpring& air, double x) {
  const double A = air.area_m2;
  const double V = air.volume_m3 - A * x;
  const double n = air.exponent;
  const double p_0 = air.pressure_pa + p_atm;
  const double squeeze = std::log(air.volume_m3 / V);
  const double p = p_0 * std::exp(n * squeeze);
  const double gas_work = p_0 * air.volume_m3 * squeeze * expm1_over((n - 1.0) * squeeze);
  return {A * (p - p_atm), n * p * A * A / V, gas_work - p_atm * A * x};
}

ForceRateEnergy at(const TableSpring& table, double x) {
  const core::Polyline& F = table.force_n;
  return {F(x), F.slope(x), F.integral(x) - F.integral(0.0)};
}

ForceRateEnergy at(const Bumper& bumper, double x, double stroke_m) {
  const double u = (x - (stroke_m - bumper.length_m)) / bumper.length_m;
  if (u <= 0.0) return {};
  return {bumper.end_force_n * u * u, 2.0 * bumper.end_force_n * u / bumper.length_m,
          bumper.end_force_n * bumper.length_m * u * u * u / 3.0};
}

double held(double x, double stroke_m) {
  return x < 0.0 ? 0.0 : (x > stroke_m ? stroke_m : x);
}

ForceRateEnergy whole(const Spring& spring, double travel_m, double stroke_m) {
  const double x = held(travel_m, stroke_m);
  ForceRateEnergy sum = std::visit([x](const auto& kind) { return at(kind, x); }, spring.kind);
  if (!spring.bumper) return sum;
  const ForceRateEnergy extra = at(*spring.bumper, x, stroke_m);
  sum.force_n += extra.force_n;
  sum.rate_n_m += extra.rate_n_m;
  sum.energy_j += extra.energy_j;
  return sum;
}

}  // namespace

double spring_force_n(const Spring& spring, double travel_m, double stroke_m) {
  return whole(spring, travel_m, stroke_m).force_n;
}

double spring_rate_n_m(const Spring& spring, double travel_m, double stroke_m) {
  return whole(spring, travel_m, stroke_m).rate_n_m;
}

double spring_energy_j(const Spring& spring, double travel_m, double stroke_m) {
  return whole(spring, travel_m, stroke_m).energy_j;
}

double equilibrium_travel_m(const End& end, double wheel_load_n) {
  const auto surplus = [&](double x) {
    return spring_force_n(*end.spring, x, end.stroke_m) - wheel_load_n * end.ratio(x);
  };
  if (surplus(0.0) >= 0.0) return 0.0;
  if (surplus(end.stroke_m) <= 0.0) return end.stroke_m;
  double low = 0.0;
  double high = end.stroke_m;
  constexpr int halvings = 60;
  for (int i = 0; i < halvings; ++i) {
    const double middle = 0.5 * (low + high);
    (surplus(middle) < 0.0 ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

double wheel_travel_m(const End& end, double shaft_travel_m) {
  return end.ratio.integral(shaft_travel_m) - end.ratio.integral(0.0);
}

double wheel_rate_n_m(const End& end, double shaft_travel_m) {
  const double x = held(shaft_travel_m, end.stroke_m);
  const double r = end.ratio(x);
  const double k = spring_rate_n_m(*end.spring, x, end.stroke_m);
  const double F = spring_force_n(*end.spring, x, end.stroke_m);
  return (k - F * end.ratio.slope(x) / r) / (r * r);
}

double natural_frequency_hz(double rate_n_m, double mass_kg) {
  return std::sqrt(rate_n_m / mass_kg) / (2.0 * std::numbers::pi);
}

double critical_damping_n_s_m(double rate_n_m, double mass_kg) {
  return 2.0 * std::sqrt(rate_n_m * mass_kg);
}

double rate_in_series_n_m(double first_n_m, double second_n_m) {
  return first_n_m * second_n_m / (first_n_m + second_n_m);
}

}  // namespace clickwise::bike
