#include "clickwise/damper/law.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace clickwise::damper {

namespace {

constexpr double reference_force_n = 100.0;  // B is the speed that the bleed passes at this force
constexpr double infinite = std::numeric_limits<double>::infinity();

double squared(double x) {
  return x * x;
}

// sqrt(F_p) above the knee: the positive root of s^2 + (S B / 10) s - (F_o + S v) = 0, in the form
// that loses no digits when the middle term is large.
double root_above_knee(const Law& law, double v) {
  const double b = law.slope_n_s_m * law.bleed_m_s / std::sqrt(reference_force_n);
  const double c = law.opening_n + law.slope_n_s_m * v;
  return c > 0.0 ? 2.0 * c / (b + std::hypot(b, 2.0 * std::sqrt(c))) : 0.0;
}

// Speed through bleed and port alone: F = 100 (v / B)^2 + P v^2.
double speed_of_bleed(const Law& law, double force_n) {
  if (force_n == 0.0) return 0.0;
  return std::sqrt(force_n / (reference_force_n / squared(law.bleed_m_s) + law.port_n_s2_m2));
}

// Speed that bleed and open valve pass at a force F_p over them, with no port in series.
double speed_without_port(const Law& law, double F_p) {
  return law.bleed_m_s * std::sqrt(F_p / reference_force_n) +
         (F_p - law.opening_n) / law.slope_n_s_m;
}

// F(v) is convex above the knee, so Newton's steps from above the root stay above it.
double newton_from_above(const Law& law, double force_n, double v) {
  constexpr int enough = 60;
  for (int i = 0; i < enough; ++i) {
    const double next = v - (law.force_n(v) - force_n) / law.slope_at(v);
    if (!(next < v)) break;
    v = std::max(next, law.knee_m_s());
  }
  return v;
}

}  // namespace

double Law::knee_m_s() const {
  if (!has_valve()) return infinite;
  if (opening_n == 0.0) return 0.0;
  return bleed_m_s * std::sqrt(opening_n / reference_force_n);
}

double Law::force_n(double speed_m_s) const {
  const double v = speed_m_s < 0.0 ? 0.0 : speed_m_s;
  const double port = port_n_s2_m2 * v * v;
  if (v == 0.0 && bleed_m_s > 0.0) return 0.0;
  if (v == 0.0) return opening_n;
  if (v < knee_m_s()) return reference_force_n * squared(v / bleed_m_s) + port;
  return squared(root_above_knee(*this, v)) + port;
}

double Law::slope_at(double speed_m_s) const {
  const double v = speed_m_s < 0.0 ? 0.0 : speed_m_s;
  const double port = 2.0 * port_n_s2_m2 * v;
  if (v < knee_m_s())
    return bleed_m_s > 0.0 ? 2.0 * reference_force_n * v / squared(bleed_m_s) + port : infinite;
  if (bleed_m_s == 0.0) return slope_n_s_m + port;
  const double s = root_above_knee(*this, v);
  const double bleed_part = bleed_m_s / (2.0 * std::sqrt(reference_force_n) * s);
  return 1.0 / (bleed_part + 1.0 / slope_n_s_m) + port;
}

double Law::speed_m_s(double force_n) const {
  const double F = force_n < 0.0 ? 0.0 : force_n;
  const double knee = knee_m_s();
  if (!has_valve() || F <= opening_n + port_n_s2_m2 * squared(knee))
    return speed_of_bleed(*this, F);
  const double open = speed_without_port(*this, F);
  if (port_n_s2_m2 == 0.0) return open;
  return newton_from_above(*this, F, std::min(open, std::sqrt(F / port_n_s2_m2)));
}

double Curve::force_n(double velocity_m_s) const {
  if (velocity_m_s > 0.0) return compression.force_n(velocity_m_s);
  if (velocity_m_s < 0.0) return -rebound.force_n(-velocity_m_s);
  return 0.0 * velocity_m_s;
}

}  // namespace clickwise::damper
