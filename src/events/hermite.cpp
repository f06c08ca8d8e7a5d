#include "hermite.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace clickwise::events {

namespace {

// Roots of p s^2 + q s + r in (0, 1), ascending; unused places hold 1.
std::array<double, 2> roots_inside(double p, double q, double r) {
  std::array<double, 2> roots{1.0, 1.0};
  const double discriminant = q * q - 4.0 * p * r;
  if (!(discriminant >= 0.0)) return roots;
  // The form that does not cancel.
  const double sum = -0.5 * (q + std::copysign(std::sqrt(discriminant), q));
  if (p != 0.0) roots[0] = sum / p;
  if (sum != 0.0) roots[1] = r / sum;
  for (double& root : roots)
    if (!(root > 0.0 && root < 1.0)) root = 1.0;
  std::ranges::sort(roots);
  return roots;
}

}  // namespace

double Hermite::highest() const {
  double best = 0.0;
  const auto turns = roots_inside(3.0 * a_, 2.0 * b_, c_);
  for (const double s : {turns[0], turns[1], 1.0})
    if (value(s) > value(best)) best = s;
  return best;
}

std::optional<double> Hermite::first_reach(double level) const {
  const auto turns = roots_inside(3.0 * a_, 2.0 * b_, c_);
  double low = 0.0;
  for (const double high : {turns[0], turns[1], 1.0}) {
    if (value(high) < level) {
      low = high;
      continue;
    }
    double above = high;
    for (int i = 0; i < 60 && above - low > 1e-12; ++i) {
      const double middle = 0.5 * (low + above);
      (value(middle) < level ? low : above) = middle;
    }
    return above;
  }
  return std::nullopt;
}

}  // namespace clickwise::events
