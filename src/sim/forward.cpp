#include "clickwise/sim/forward.hpp"

#include <cmath>

#include "clickwise/core/units.hpp"

namespace clickwise::sim {

Ridden ride_forward(const VehicleEnd& end, const Forcing& forcing) {
  Ridden ridden;
  const double h = forcing.step_s;
  EndState state{.wheel_m = forcing.wheel_m, .wheel_m_s = forcing.wheel_m_s};
  const auto start = end.table.at(forcing.wheel_m);
  ridden.travel_m.push_back(start.shaft_m);
  ridden.velocity_m_s.push_back(forcing.wheel_m_s * start.inverse_ratio);
  for (std::size_t n = 0; n < forcing.steps(); ++n) {
    const double ground = forcing.ground_m[n];
    const double rate = n > 0 ? (ground - forcing.ground_m[n - 1]) / h : forcing.wheel_m_s;
    const auto output = step(end, state, {ground, rate}, h);
    const double fictitious = core::standard_gravity_m_s2 - forcing.load_m_s2[n];
    state.sprung_m_s += h * fictitious;
    state.wheel_m_s += h * fictitious;
    state.sprung_m += h * h * fictitious;
    state.wheel_m += h * h * fictitious;
    if ((n + 1) % forcing.substeps == 0) {
      ridden.travel_m.push_back(output.travel_m);
      ridden.velocity_m_s.push_back(output.velocity_m_s);
    }
  }
  return ridden;
}

}  // namespace clickwise::sim
