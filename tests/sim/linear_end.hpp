// A quarter-car whose answers have closed forms: linear spring and damper, no stops in reach.
#pragma once

#include <cmath>
#include <numbers>

#include "clickwise/core/units.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim_test {

struct LinearParts {
  double sprung_kg = 40.0;
  double unsprung_kg = 1.0;
  double stiffness_n_m = 6000.0;
  double damping_n_s_m = 300.0;
  double tyre_n_m = 90e3;
  double tyre_n_s_m = 150.0;
  double friction_n = 0.0;
};

// The spring is preloaded so that static travel is the middle of a stroke of 0.4 m.
inline sim::VehicleEnd linear_end(const LinearParts& p) {
  const double weight = p.sprung_kg * core::standard_gravity_m_s2;
  const auto force = [=](double x) { return weight + p.stiffness_n_m * (x - 0.2); };
  const damper::Law law{.slope_n_s_m = p.damping_n_s_m};
  return {.sprung_mass_kg = p.sprung_kg,
          .unsprung_mass_kg = p.unsprung_kg,
          .stroke_m = 0.4,
          .friction_n = p.friction_n,
          .tyre = {p.tyre_n_m, p.tyre_n_s_m},
          .curve = {law, law},
          .stop = {},
          .table = sim::WheelTable(0.4, core::Polyline::constant(1.0), force)};
}

// A tyre so stiff and a wheel so light that the wheel follows the ground: the one-degree model.
inline LinearParts one_degree(double natural_hz, double ratio) {
  LinearParts p;
  const double wn = 2.0 * std::numbers::pi * natural_hz;
  p.stiffness_n_m = p.sprung_kg * wn * wn;
  p.damping_n_s_m = 2.0 * ratio * p.sprung_kg * wn;
  p.unsprung_kg = 0.5;
  p.tyre_n_m = 2e7;
  p.tyre_n_s_m = 3000.0;
  return p;
}

}  // namespace clickwise::sim_test
