#include "reflection.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::signal {

namespace {
constexpr std::size_t least_fit = 4;
constexpr double least_significance = 3.0;
}  // namespace

// In polynomials orthogonal on the centred grid t: 1, t, t^2 - m with m the mean of t^2.
OddReflection::End OddReflection::fit_end(std::span<const double> values, double noise,
                                          bool from_back) {
  const std::size_t n = values.size();
  if (n < least_fit) return {from_back ? values.back() : values.front(), 0.0};
  const double centre = 0.5 * static_cast<double>(n - 1);
  const double m = (static_cast<double>(n * n) - 1.0) / 12.0;
  double mean = 0.0, slope = 0.0, bend = 0.0, slope_norm = 0.0, bend_norm = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    const double y = values[from_back ? n - 1 - i : i] - values.front();
    const double t = static_cast<double>(i) - centre;
    const double q = t * t - m;
    mean += y / static_cast<double>(n);
    slope += t * y;
    slope_norm += t * t;
    bend += q * y;
    bend_norm += q * q;
  }
  slope /= slope_norm;
  bend /= bend_norm;
  const double doubt = least_significance * least_significance * noise * noise / bend_norm;
  bend *= bend * bend > doubt ? 1.0 - doubt / (bend * bend) : 0.0;
  const double value = values.front() + mean - slope * centre + bend * (centre * centre - m);
  return {value, 2.0 * bend};
}

OddReflection::OddReflection(std::span<const double> values, std::size_t fit, double noise)
    : values_(values), length_(static_cast<double>(std::max(fit, least_fit))) {
  const std::size_t length = std::min(std::max(fit, least_fit), values.size());
  first_ = fit_end(values.first(length), noise, false);
  last_ = fit_end(values.last(length), noise, true);
}

double OddReflection::turned(const End& end, std::ptrdiff_t beyond) const {
  const double share = static_cast<double>(beyond) / length_;
  return 2.0 * end.value - end.acceleration * length_ * length_ * std::expm1(-share * share);
}

double OddReflection::at(std::ptrdiff_t i) const {
  const auto n = static_cast<std::ptrdiff_t>(values_.size());
  double sign = 1.0;
  double offset = 0.0;
  while (n > 1 && (i < 0 || i >= n)) {
    offset += sign * (i < 0 ? turned(first_, -i) : turned(last_, i - (n - 1)));
    sign = -sign;
    i = i < 0 ? -i : 2 * (n - 1) - i;
  }
  return n > 1 ? offset + sign * values_[static_cast<std::size_t>(i)] : values_.front();
}

}  // namespace clickwise::signal
