#include "clickwise/core/statistics.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <optional>

namespace clickwise::core {

namespace {

constexpr double not_known = std::numeric_limits<double>::quiet_NaN();
constexpr std::size_t sampled_every = 64;
constexpr std::size_t block = 1024;
constexpr std::size_t worth_sampling = 64 * sampled_every;

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

// Two values that the wanted order statistics lie between, most probably: order statistics of every
// so many values, five deviations of a sample's rank away on either side.
struct Bracket {
  double low, high;
};

Bracket bracket(std::span<const double> values, const Place& place) {
  std::vector<double> sample;
  sample.reserve(values.size() / sampled_every + 1);
  for (std::size_t i = 0; i < values.size(); i += sampled_every) sample.push_back(values[i]);
  const auto n = static_cast<double>(sample.size());
  const double share = static_cast<double>(place.below) / static_cast<double>(values.size());
  const double margin = 5.0 * std::sqrt(n * share * (1.0 - share)) + 5.0;
  const auto ranked = [&](double rank) {
    if (rank < 0.0) return -std::numeric_limits<double>::infinity();
    if (rank >= n) return std::numeric_limits<double>::infinity();
    const auto wanted = sample.begin() + static_cast<std::ptrdiff_t>(rank);
    std::nth_element(sample.begin(), wanted, sample.end());
    return *wanted;
  };
  return {ranked(n * share - margin), ranked(n * share + margin)};
}

// Only the values inside the bracket need sorting (R. W. Floyd and R. L. Rivest, Communications of
// the ACM 18:165-172, 1975); empty where the bracket misses the place.
std::optional<double> bracketed(std::span<const double> values, const Place& place) {
  const Bracket within = bracket(values, place);
  std::size_t under = 0;
  std::vector<double> near;
  for (std::size_t begin = 0; begin < values.size(); begin += block) {
    // Without a branch: every value is written, and only the near ones are kept.
    std::array<double, block> kept;
    std::size_t count = 0;
    for (const double value : values.subspan(begin, std::min(block, values.size() - begin))) {
      const bool is_under = value < within.low;
      kept[count] = value;
      count += static_cast<std::size_t>(!is_under & (value <= within.high));
      under += static_cast<std::size_t>(is_under);
    }
    near.insert(near.end(), kept.begin(), kept.begin() + static_cast<std::ptrdiff_t>(count));
  }
  if (place.below < under || place.below + 1 - under >= near.size()) return std::nullopt;
  return between_neighbours(near, {place.below - under, place.part});
}

double quantile_of_many(std::span<const double> values, double p) {
  const Place place = place_of(p, values.size());
  if (const auto found = bracketed(values, place)) return *found;
  std::vector<double> copy(values.begin(), values.end());
  return between_neighbours(copy, place);
}

}  // namespace

double quantile_of(std::span<const double> values, double p) {
  if (values.size() >= worth_sampling) return quantile_of_many(values, p);
  return quantile({values.begin(), values.end()}, p);
}

double quantile(std::vector<double> values, double p) {
  if (values.empty()) return not_known;
  if (values.size() >= worth_sampling) return quantile_of_many(values, p);
  return between_neighbours(values, place_of(p, values.size()));
}

BinnedQuantile::BinnedQuantile(std::span<const double> counts, double p) {
  std::size_t total = 0;
  for (const double count : counts) total += static_cast<std::size_t>(count);
  const Place place = place_of(p, total);
  part_ = place.part;
  std::size_t before = 0;  // values in bins in front of `last_`
  const auto holds = [&](std::size_t rank) {
    return rank < before + static_cast<std::size_t>(counts[last_]);
  };
  const auto advance_to = [&](std::size_t rank) {
    while (!holds(rank)) before += static_cast<std::size_t>(counts[last_++]);
  };
  advance_to(place.below);
  first_ = last_;
  rank_ = place.below - before;
  if (part_ > 0.0) advance_to(place.below + 1);
}

double BinnedQuantile::value() {
  return between_neighbours(gathered_, {rank_, part_});
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
