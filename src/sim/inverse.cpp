#include "clickwise/sim/inverse.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"

namespace clickwise::sim {

namespace {

constexpr double gravity = core::standard_gravity_m_s2;
constexpr double hop_s = 0.06;  // airtime over an obstacle of the relief's size; see (R8)

// Wheel travel at a shaft travel: the table turned round, by bisection between its nodes.
class WheelOf {
public:
  explicit WheelOf(const WheelTable& table) : table_(table) {}

  double operator()(double shaft_m) {
    const auto& nodes = table_.nodes;
    const std::size_t last = nodes.size() - 2;
    while (i_ < last && nodes[i_ + 1].shaft_m < shaft_m) ++i_;
    while (i_ > 0 && nodes[i_].shaft_m > shaft_m) --i_;
    const double w = (shaft_m - nodes[i_].shaft_m) / (nodes[i_ + 1].shaft_m - nodes[i_].shaft_m);
    return table_.cell_m * (static_cast<double>(i_) + w);
  }

private:
  const WheelTable& table_;
  std::size_t i_ = 0;
};

// Travel between samples on the cubic through travel and velocity.
double hermite(const Stretch& s, std::size_t i, double w) {
  const double x0 = s.travel_m[i], x1 = s.travel_m[i + 1];
  const double m0 = s.velocity_m_s[i] * s.interval_s, m1 = s.velocity_m_s[i + 1] * s.interval_s;
  const double rise = x1 - x0;
  return x0 + w * (m0 + w * (3.0 * rise - 2.0 * m0 - m1 + w * (m0 + m1 - 2.0 * rise)));
}

std::vector<double> wheel_path(const WheelTable& table, const Stretch& stretch,
                               std::size_t substeps) {
  const std::size_t samples = stretch.travel_m.size();
  WheelOf wheel_of(table);
  std::vector<double> z;
  z.reserve((samples - 1) * substeps + 1);
  for (std::size_t i = 0; i + 1 < samples; ++i)
    for (std::size_t k = 0; k < substeps; ++k)
      z.push_back(
          wheel_of(hermite(stretch, i, static_cast<double>(k) / static_cast<double>(substeps))));
  z.push_back(wheel_of(stretch.travel_m.back()));
  return z;
}

// Force that holds or breaks away without a speed of its own: friction and a platform's opening.
double breakaway_n(const VehicleEnd& end, const damper::Law& law) {
  return end.friction_n + (law.bleed_m_s > 0.0 ? 0.0 : law.opening_n);
}

// Everything per step, before the unknown parts are filled.
struct Steps {
  std::vector<double> relative_m_s2;  // z̈ of the step
  std::vector<double> shaft_m_s;      // v
  std::vector<double> wheel_n;        // F_w
  std::vector<double> tyre_n;
  std::vector<std::uint8_t> at_top;
  std::vector<std::uint8_t> at_bottom;
};

// Straight between the known neighbours of each unknown run; held at the ends.
void bridge(std::vector<double>& values, const std::vector<std::uint8_t>& unknown) {
  const std::size_t n = values.size();
  for (std::size_t i = 0; i < n; ++i) {
    if (unknown[i] == 0) continue;
    std::size_t end = i;
    while (end < n && unknown[end] != 0) ++end;
    const bool has_left = i > 0, has_right = end < n;
    const double left = has_left ? values[i - 1] : has_right ? values[end] : 0.0;
    const double right = has_right ? values[end] : left;
    const double span = static_cast<double>(end - i + 1);
    for (std::size_t k = i; k < end; ++k)
      values[k] = left + (right - left) * static_cast<double>(k - i + 1) / span;
    i = end;
  }
}

// Damper and friction at the shaft for each step's speed; while still, what holds is taken straight
// between the speeds before and after.
std::vector<double> resisting_force(const VehicleEnd& end, const std::vector<double>& v,
                                    double still_m_s) {
  std::vector<double> held(v.size());
  std::vector<std::uint8_t> still(v.size());
  for (std::size_t n = 0; n < v.size(); ++n) {
    const damper::Law& law = v[n] >= 0.0 ? end.curve.compression : end.curve.rebound;
    held[n] = std::copysign(breakaway_n(end, law), v[n]);
    still[n] = std::abs(v[n]) < still_m_s;
  }
  bridge(held, still);
  for (std::size_t n = 0; n < v.size(); ++n) {
    const damper::Law& law = v[n] >= 0.0 ? end.curve.compression : end.curve.rebound;
    const double flowing = law.force_n(std::abs(v[n])) - (breakaway_n(end, law) - end.friction_n);
    held[n] += std::copysign(flowing, v[n]);
  }
  return held;
}

Steps forces(const VehicleEnd& end, const std::vector<double>& z, double start_m_s, double h,
             const InverseOptions& options) {
  const std::size_t count = z.size() - 1;
  Steps steps;
  std::vector<double> spring(count), inverse_ratio(count);
  auto& v = steps.shaft_m_s;
  double before = start_m_s;
  for (std::size_t n = 0; n < count; ++n) {
    const auto node = end.table.at(z[n]);
    const double u = (z[n + 1] - z[n]) / h;
    spring[n] = node.spring_n;
    inverse_ratio[n] = node.inverse_ratio;
    v.push_back(u * node.inverse_ratio);
    steps.relative_m_s2.push_back((u - before) / h);
    before = u;
    steps.at_top.push_back(node.shaft_m < options.stop_margin_m);
    steps.at_bottom.push_back(node.shaft_m > end.stroke_m - options.stop_margin_m);
  }
  const auto resisting = resisting_force(end, v, options.still_m_s);
  for (std::size_t n = 0; n < count; ++n) {
    const double wheel = spring[n] + resisting[n] * inverse_ratio[n];
    steps.wheel_n.push_back(wheel);
    steps.tyre_n.push_back(wheel * (1.0 + end.unsprung_mass_kg / end.sprung_mass_kg) +
                           end.unsprung_mass_kg * steps.relative_m_s2[n]);
  }
  return steps;
}

// A landing pushes the end off its top stop: the last steps before tyre and spring are seen to
// carry, as far back as the end already gathers speed, belong to the landing.
void free_landings(Steps& steps, double least_tyre_n) {
  for (std::size_t end = 1; end < steps.at_top.size(); ++end) {
    if (steps.at_top[end] != 0 || steps.at_top[end - 1] == 0 || steps.tyre_n[end] < least_tyre_n)
      continue;
    for (std::size_t n = end; n-- > 0 && steps.at_top[n] != 0;) {
      if (!(steps.shaft_m_s[n] > 0.0 && steps.relative_m_s2[n] > 0.0)) break;
      steps.at_top[n] = 0;
    }
  }
}

// Tyre deflection that lags its force by the tyre's damping: the forward scheme turned round.
double deflect(const bike::Tyre& tyre, double h, double force_n, double before_m) {
  const double c_h = tyre.damping_n_s_m / h;
  return (force_n + c_h * before_m) / (tyre.stiffness_n_m + c_h);
}

// On metal at full stroke the two masses move as one on the tyre, apart from what little is
// recorded of their relative motion: D̈ = ÿ + g - F_t / M - z̈ m_s / M with M = m_s + m_u.
class OnMetal {
public:
  OnMetal(const VehicleEnd& end, const Steps& steps, double h) : end_(end), steps_(steps), h_(h) {}

  // Tyre force over [from, to) for a ground of constant acceleration, and the deflection it ends
  // in.
  double run(std::size_t from, std::size_t to, double deflection, double rate, double ground_m_s2,
             std::vector<double>& tyre_n) const {
    const double whole = end_.sprung_mass_kg + end_.unsprung_mass_kg;
    for (std::size_t n = from; n < to; ++n) {
      const double force = end_.tyre.stiffness_n_m * deflection + end_.tyre.damping_n_s_m * rate;
      tyre_n[n] = force;
      rate += h_ * (ground_m_s2 + gravity -
                    (force + steps_.relative_m_s2[n] * end_.sprung_mass_kg) / whole);
      deflection += h_ * rate;
    }
    return deflection;
  }

private:
  const VehicleEnd& end_;
  const Steps& steps_;
  double h_;
};

// The ground's acceleration while on metal is the constant that meets the tyre's force known
// behind it (the equation is linear in it). What the stops carry need not be known.
void ride_on_metal(const VehicleEnd& end, Steps& steps, double h) {
  const OnMetal metal(end, steps, h);
  double deflection = 0.0, before = 0.0;
  const std::size_t count = steps.tyre_n.size();
  for (std::size_t n = 0; n < count; ++n) {
    if (steps.at_bottom[n] != 0) {
      std::size_t to = n;
      while (to < count && steps.at_bottom[to] != 0) ++to;
      const double rate = (deflection - before) / h;
      const double start = deflection + h * rate;
      const double level = metal.run(n, to, start, rate, 0.0, steps.tyre_n);
      if (to < count) {
        const double risen = metal.run(n, to, start, rate, 1.0, steps.tyre_n) - level;
        const double known = std::max(0.0, steps.tyre_n[to]) / end.tyre.stiffness_n_m;
        metal.run(n, to, start, rate, (known - level) / risen, steps.tyre_n);
      }
      n = to - 1;
    }
    before = deflection;
    deflection = deflect(end.tyre, h, std::max(0.0, steps.tyre_n[n]), deflection);
  }
}

// In the air at full extension nothing presses; at either stop the wheel force is what moves the
// two masses against each other as recorded.
void guess_at_stops(const VehicleEnd& end, Steps& steps) {
  const double mobility = 1.0 / end.sprung_mass_kg + 1.0 / end.unsprung_mass_kg;
  for (std::size_t n = 0; n < steps.tyre_n.size(); ++n) {
    if (steps.at_top[n] == 0 && steps.at_bottom[n] == 0) continue;
    steps.tyre_n[n] = steps.at_top[n] != 0 ? 0.0 : std::max(0.0, steps.tyre_n[n]);
    steps.wheel_n[n] = (steps.tyre_n[n] / end.unsprung_mass_kg - steps.relative_m_s2[n]) / mobility;
  }
}

// Ground under the wheel in the air from step `from` to `to`: a straight line over solid ground,
// from take-off to landing, less what hangs; never above the wheel.
void hang_ground(Forcing& forcing, const std::vector<double>& z, std::size_t from, std::size_t to,
                 const InverseOptions& options) {
  const double h = forcing.step_s;
  const bool takes_off = from > 0, lands = to < forcing.steps();
  std::vector<double> fall(to - from + 2);  // of the frame, from rest at take-off
  double rate = 0.0;
  for (std::size_t k = 1; k < fall.size(); ++k) {
    const std::size_t n = std::min(from + k - 1, forcing.steps() - 1);
    rate += h * (forcing.load_m_s2[n] - gravity);
    fall[k] = fall[k - 1] + h * rate;
  }
  const double span = static_cast<double>(to - from + 1);
  const double start = takes_off ? forcing.ground_m[from - 1] : z[from];
  const double stop = lands ? forcing.ground_m[to] : z[std::min(to, z.size() - 1)];
  const double seconds = span * h;
  const double depth = seconds > options.longest_hop_s
                           ? 0.0
                           : options.relief_m * (1.0 - std::exp(-std::pow(seconds / hop_s, 1.5)));
  for (std::size_t n = from; n < to; ++n) {
    const double k = static_cast<double>(n - from + 1);
    const double part = k / span;
    const double chord = start + (stop + fall.back() - start) * part - fall[n - from + 1];
    const double below = chord - depth * 4.0 * part * (1.0 - part);
    forcing.ground_m[n] = static_cast<float>(std::min(below, z[n]));
  }
}

void lay_ground_under(const VehicleEnd& end, const Steps& steps, const std::vector<double>& z,
                      const InverseOptions& options, Forcing& forcing) {
  double deflection = std::max(0.0, steps.tyre_n.front()) / end.tyre.stiffness_n_m;
  for (std::size_t n = 0; n < steps.tyre_n.size(); ++n) {
    const bool airborne = steps.tyre_n[n] < options.least_tyre_n;
    forcing.airborne.push_back(airborne);
    deflection = airborne ? 0.0 : deflect(end.tyre, forcing.step_s, steps.tyre_n[n], deflection);
    forcing.ground_m.push_back(static_cast<float>(z[n] + deflection));
    forcing.load_m_s2.push_back(static_cast<float>(steps.wheel_n[n] / end.sprung_mass_kg));
  }
  for (std::size_t n = 0; n < forcing.steps(); ++n) {
    if (forcing.airborne[n] == 0) continue;
    std::size_t to = n;
    while (to < forcing.steps() && forcing.airborne[to] != 0) ++to;
    hang_ground(forcing, z, n, to, options);
    n = to;
  }
}

}  // namespace

Forcing recover_forcing(const VehicleEnd& end, const Stretch& stretch,
                        const InverseOptions& options) {
  Forcing forcing;
  if (stretch.travel_m.size() < 4) return forcing;
  forcing.substeps =
      static_cast<std::size_t>(std::ceil(stretch.interval_s / options.longest_step_s - 1e-9));
  forcing.step_s = stretch.interval_s / static_cast<double>(forcing.substeps);
  const auto z = wheel_path(end.table, stretch, forcing.substeps);
  forcing.wheel_m = z[0];
  forcing.wheel_m_s = (z[1] - z[0]) / forcing.step_s;
  Steps steps = forces(end, z, forcing.wheel_m_s, forcing.step_s, options);
  free_landings(steps, options.least_tyre_n);
  ride_on_metal(end, steps, forcing.step_s);
  guess_at_stops(end, steps);
  lay_ground_under(end, steps, z, options, forcing);
  return forcing;
}

}  // namespace clickwise::sim
