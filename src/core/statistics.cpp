#include "clickwise/core/statistics.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace clickwise::core {

namespace {
constexpr double not_known = std::numeric_limits<double>::quiet_NaN();
}

double quantile(std::vector<double> values, double p) {
  if (values.empty()) return not_known;
  const double place = std::clamp(p, 0.0, 1.0) * static_cast<double>(values.size() - 1);
  const auto below = static_cast<std::ptrdiff_t>(place);
  std::nth_element(values.begin(), values.begin() + below, values.end());
  const double low = values[static_cast<std::size_t>(below)];
  const double part = place - static_cast<double>(below);
  if (part == 0.0) return low;
  const double high = *std::min_element(values.begin() + below + 1, values.end());
  return low + part * (high - low);
}

double median(std::vector<double> values) { return quantile(std::move(values), 0.5); }

MeanAndDeviation mean_and_deviation(const std::vector<double>& values) {
  if (values.empty()) return {not_known, not_known};
  const auto n = static_cast<double>(values.size());
  long double sum = 0.0L;
  for (const double value : values) sum += value;
  const long double mean = sum / static_cast<long double>(n);
  long double squares = 0.0L;
  long double rounding = 0.0L;
  for (const double value : values) {
    const long double d = value - mean;
    squares += d * d;
    rounding += d;
  }
  if (values.size() < 2) return {static_cast<double>(mean), not_known};
  const long double about = squares - rounding * rounding / static_cast<long double>(n);
  return {static_cast<double>(mean),
          static_cast<double>(std::sqrt(about / static_cast<long double>(n - 1.0)))};
}

double lag_one_correlation(const std::vector<double>& values) {
  if (values.size() < 2) return not_known;
  const auto mean = static_cast<long double>(mean_and_deviation(values).mean);
  long double products = 0.0L;
  long double squares = 0.0L;
  for (std::size_t i = 0; i < values.size(); ++i) {
    const long double d = values[i] - mean;
    squares += d * d;
    if (i + 1 < values.size()) products += d * (values[i + 1] - mean);
  }
  return static_cast<double>(products / squares);
}

}  // namespace clickwise::core
