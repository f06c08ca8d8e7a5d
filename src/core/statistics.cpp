#include "clickwise/core/statistics.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <limits>

namespace clickwise::core {

namespace {

constexpr double not_known = std::numeric_limits<double>::quiet_NaN();
constexpr std::size_t worth_counting = 4096;

// Where a quantile lies between order statistics, counted from 0.
struct Place {
  std::size_t below;
  double part;
};

Place place_of(double p, std::size_t values) {
  const double place = std::clamp(p, 0.0, 1.0) * static_cast<double>(values - 1);
  const auto below = static_cast<std::size_t>(place);
  return {below, place - static_cast<double>(below)};
}

double between_neighbours(std::vector<double>& values, const Place& place) {
  const auto below = values.begin() + static_cast<std::ptrdiff_t>(place.below);
  std::nth_element(values.begin(), below, values.end());
  if (place.part == 0.0) return *below;
  const double high = *std::min_element(below + 1, values.end());
  return *below + place.part * (high - *below);
}

// Even cells over the values' range: their counts say which ones hold an order statistic, so that
// only those need sorting.
class Cells {
public:
  explicit Cells(std::span<const double> values) : values_(values), least_(values.front()) {
    double most = least_;
    for (const double value : values) {
      least_ = std::min(least_, value);
      most = std::max(most, value);
    }
    cells_per_unit_ = static_cast<double>(counts_.size() - 1) / (most - least_);
    if (!usable()) return;
    for (const double value : values) ++counts_[cell(value)];
  }

  bool usable() const { return std::isfinite(cells_per_unit_) && cells_per_unit_ > 0.0; }

  double at(const Place& place) const {
    std::size_t first = 0, before = 0;
    while (before + counts_[first] <= place.below) before += counts_[first++];
    std::size_t last = first;
    const std::size_t wanted = place.below + (place.part > 0.0 ? 1 : 0);
    for (std::size_t passed = before + counts_[first]; passed <= wanted;) passed += counts_[++last];
    std::vector<double> near;
    near.reserve(counts_[first] + counts_[last]);
    for (const double value : values_)
      if (cell(value) - first <= last - first) near.push_back(value);
    return between_neighbours(near, {place.below - before, place.part});
  }

private:
  std::size_t cell(double value) const {
    return static_cast<std::size_t>(static_cast<std::int64_t>((value - least_) * cells_per_unit_));
  }

  std::span<const double> values_;
  double least_;
  double cells_per_unit_ = 0.0;
  std::array<std::size_t, 2048> counts_{};
};

}  // namespace

std::vector<double> quantiles(std::span<const double> values, std::span<const double> p) {
  std::vector<double> found;
  if (values.empty()) {
    found.assign(p.size(), not_known);
    return found;
  }
  const auto at = [&](double q) { return place_of(q, values.size()); };
  if (values.size() >= worth_counting) {
    const Cells cells(values);
    if (cells.usable()) {
      for (const double q : p) found.push_back(cells.at(at(q)));
      return found;
    }
  }
  std::vector<double> copy(values.begin(), values.end());
  for (const double q : p) found.push_back(between_neighbours(copy, at(q)));
  return found;
}

double quantile(std::vector<double> values, double p) {
  if (values.size() < worth_counting && !values.empty())
    return between_neighbours(values, place_of(p, values.size()));
  return quantiles(values, {&p, 1}).front();
}

double median(std::vector<double> values) {
  return quantile(std::move(values), 0.5);
}

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
