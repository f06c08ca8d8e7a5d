#include "clickwise/sim/vehicle.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"

namespace clickwise::sim {

namespace {

constexpr double gravity = core::standard_gravity_m_s2;

// Shaft force of the two end stops: against compression past the stroke, against extension past 0.
double stop_force_n(const VehicleEnd& end, double travel_m, double velocity_m_s) {
  if (travel_m > end.stroke_m) return end.stop.force_n(travel_m - end.stroke_m, velocity_m_s);
  if (travel_m < 0.0) return -end.stop.force_n(-travel_m, -velocity_m_s);
  return 0.0;
}

double tyre_force_n(const bike::Tyre& tyre, const EndState& state, const Ground& ground) {
  const double deflection = ground.height_m - state.wheel_m;
  if (!(deflection > 0.0)) return 0.0;
  const double rate = ground.rate_m_s - state.wheel_m_s;
  return std::max(0.0, tyre.stiffness_n_m * deflection + tyre.damping_n_s_m * rate);
}

// Wheel force that holds still: spring and stops only.
double static_wheel_force_n(const VehicleEnd& end, double wheel_travel_m) {
  const auto node = end.table.at(wheel_travel_m);
  return node.spring_n + stop_force_n(end, node.shaft_m, 0.0) * node.inverse_ratio;
}

double half(double stiffness, double deflection) {
  return 0.5 * stiffness * deflection * deflection;
}

}  // namespace

double EndStopContact::force_n(double depth_m, double closing_m_s) const {
  return stiffness_n_m * depth_m * std::max(0.0, 1.0 + loss_s_m * closing_m_s);
}

double implicit_speed_m_s(const damper::Law& law, double gain, double drive_m_s) {
  const double b = 0.1 * law.bleed_m_s;
  const double flow = law.has_valve() ? 1.0 / law.slope_n_s_m : 0.0;
  const double opening = law.has_valve() ? law.opening_n : INFINITY;
  double s = 2.0 * drive_m_s / (b + std::sqrt(b * b + 4.0 * gain * drive_m_s));
  if (!(s > 0.0)) return 0.0;
  if (s * s > opening) {
    const double a = gain + flow;
    const double c = drive_m_s + opening * flow;
    s = 2.0 * c / (b + std::sqrt(b * b + 4.0 * a * c));
  }
  const double port = gain * law.port_n_s2_m2;
  double v = b * s + std::max(0.0, s * s - opening) * flow;
  for (int i = 0; i < 12 && port > 0.0; ++i) {
    const double dv = b + (s * s > opening ? 2.0 * s * flow : 0.0);
    const double g = gain * s * s + v + port * v * v - drive_m_s;
    const double change = g / (2.0 * gain * s + dv + 2.0 * port * v * dv);
    s -= change;
    v = b * s + std::max(0.0, s * s - opening) * flow;
    if (change <= 1e-10 * s) break;
  }
  return v;
}

EndOutput step(const VehicleEnd& end, EndState& state, const Ground& ground, double step_s) {
  const auto node = end.table.at(state.wheel_m - state.sprung_m);
  const double inverse_ratio = node.inverse_ratio;
  const double old_v = (state.wheel_m_s - state.sprung_m_s) * inverse_ratio;
  const double stop = stop_force_n(end, node.shaft_m, old_v);
  const double tyre = tyre_force_n(end.tyre, state, ground);
  const double held = node.spring_n + stop * inverse_ratio;  // at the wheel

  const double mobility = 1.0 / end.sprung_mass_kg + 1.0 / end.unsprung_mass_kg;
  const double gain = step_s * mobility * inverse_ratio * inverse_ratio;
  const double free_v =
      old_v + step_s * (tyre / end.unsprung_mass_kg - held * mobility) * inverse_ratio;
  const double drive = std::max(0.0, std::abs(free_v) - gain * end.friction_n);
  const damper::Law& law = free_v >= 0.0 ? end.curve.compression : end.curve.rebound;
  const double v = std::copysign(implicit_speed_m_s(law, gain, drive), free_v);

  const double resisting = (free_v - v) / gain;  // damper and friction, at the shaft
  const double friction = std::clamp(resisting, -end.friction_n, end.friction_n);
  const double wheel_force = held + resisting * inverse_ratio;
  state.sprung_m_s += step_s * (wheel_force / end.sprung_mass_kg - gravity);
  state.wheel_m_s += step_s * ((tyre - wheel_force) / end.unsprung_mass_kg - gravity);
  state.sprung_m += step_s * state.sprung_m_s;
  state.wheel_m += step_s * state.wheel_m_s;
  const auto after = end.table.at(state.wheel_m - state.sprung_m);
  return {.travel_m = after.shaft_m,
          .velocity_m_s = v,
          .tyre_n = tyre,
          .spring_n = node.spring_n / inverse_ratio,
          .stop_n = stop,
          .damper_n = resisting - friction,
          .friction_n = friction,
          .felt_m_s2 = wheel_force / end.sprung_mass_kg};
}

EndState at_rest(const VehicleEnd& end, double ground_m) {
  const double weight = end.sprung_mass_kg * gravity;
  double low = -0.05;
  double high = end.table.wheel_travel_m + 0.05;
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (static_wheel_force_n(end, middle) > weight ? high : low) = middle;
  }
  const double load = weight + end.unsprung_mass_kg * gravity;
  EndState state;
  state.wheel_m = ground_m - load / end.tyre.stiffness_n_m;
  state.sprung_m = state.wheel_m - 0.5 * (low + high);
  return state;
}

double stored_j(const VehicleEnd& end, const EndState& state, double ground_m) {
  const double wheel_travel = state.wheel_m - state.sprung_m;
  const double x = end.table.at(wheel_travel).shaft_m;
  const double past = std::max({0.0, x - end.stroke_m, -x});
  return half(end.sprung_mass_kg, state.sprung_m_s) + half(end.unsprung_mass_kg, state.wheel_m_s) +
         gravity * (end.sprung_mass_kg * state.sprung_m + end.unsprung_mass_kg * state.wheel_m) +
         end.table.stored_j(wheel_travel) + half(end.stop.stiffness_n_m, past) +
         half(end.tyre.stiffness_n_m, std::max(0.0, ground_m - state.wheel_m));
}

}  // namespace clickwise::sim
