#include "reflection.hpp"

#include <algorithm>

namespace clickwise::signal {

namespace {

// The least-squares straight line through `values` (one a step), at its first sample.
double line_at_first(std::span<const double> values, bool from_back) {
  const std::size_t n = values.size();
  if (n < 3) return from_back ? values.back() : values.front();
  const double centre = 0.5 * static_cast<double>(n - 1);
  double sum = 0.0, moment = 0.0, square = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    const double y = values[from_back ? n - 1 - i : i];
    const double t = static_cast<double>(i) - centre;
    sum += y;
    moment += t * y;
    square += t * t;
  }
  return sum / static_cast<double>(n) - centre * moment / square;
}

}  // namespace

OddReflection::OddReflection(std::span<const double> values, std::size_t fit)
    : values_(values),
      first_(line_at_first(values.first(std::min(fit, values.size())), false)),
      last_(line_at_first(values.last(std::min(fit, values.size())), true)) {}

double OddReflection::at(std::ptrdiff_t i) const {
  const auto n = static_cast<std::ptrdiff_t>(values_.size());
  double sign = 1.0;
  double offset = 0.0;
  while (n > 1 && (i < 0 || i >= n)) {
    const bool before = i < 0;
    offset += sign * 2.0 * (before ? first_ : last_);
    sign = -sign;
    i = before ? -i : 2 * (n - 1) - i;
  }
  return n > 1 ? offset + sign * values_[static_cast<std::size_t>(i)] : values_.front();
}

}  // namespace clickwise::signal
