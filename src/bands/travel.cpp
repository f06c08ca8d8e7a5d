#include "clickwise/bands/travel.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numeric>
#include <stdexcept>

#include "clickwise/core/statistics.hpp"

namespace clickwise::bands {

namespace {

std::vector<double> counted_travel(std::span<const double> travel_m,
                                   std::span<const std::uint8_t> counted) {
  if (travel_m.size() != counted.size())
    throw std::invalid_argument(fmt::format("counted = {} samples; must be as many as travel, {}",
                                            counted.size(), travel_m.size()));
  std::vector<double> values;
  values.reserve(travel_m.size());
  for (std::size_t i = 0; i < counted.size(); ++i)
    if (counted[i] != 0 && std::isfinite(travel_m[i])) values.push_back(travel_m[i]);
  return values;
}

// First and last bin, counted from full extension; the samples beyond them belong to them.
struct Bins {
  double width_m;
  double first;
  double last;

  // Rounded down by hand: std::floor is a call where the oldest machines of a family have no
  // instruction for it.
  std::size_t of(double value_m) const {
    const double place = std::clamp(value_m / width_m, first, last);
    const auto towards_zero = static_cast<long long>(place);
    const long long below = towards_zero - (place < static_cast<double>(towards_zero) ? 1 : 0);
    return static_cast<std::size_t>(below - static_cast<long long>(first));
  }
};

Bins bins_over(double least_m, double most_m, double stroke_m) {
  const double width = std::max(std::min(1e-3, stroke_m / 100.0), stroke_m / 2000.0);
  const double beyond = std::ceil(0.25 * stroke_m / width);
  const double in_stroke = std::ceil(stroke_m / width * (1.0 - 1e-9));
  return {width, std::clamp(std::floor(least_m / width), -beyond, 0.0),
          std::clamp(std::floor(most_m / width), in_stroke - 1.0, in_stroke + beyond)};
}

TravelHistogram histogram_of(const std::vector<double>& values, double interval_s,
                             double stroke_m) {
  const auto [least, most] =
      values.empty() ? std::ranges::minmax_result{0.0, 0.0} : std::ranges::minmax(values);
  const Bins bins = bins_over(least, most, stroke_m);
  const auto count = static_cast<std::size_t>(bins.last - bins.first) + 1;
  TravelHistogram histogram;
  for (std::size_t i = 0; i <= count; ++i)
    histogram.edges_m.push_back((bins.first + static_cast<double>(i)) * bins.width_m);
  histogram.edges_m.front() = std::min(histogram.edges_m.front(), least);
  if (most >= histogram.edges_m.back()) histogram.edges_m.back() = std::nextafter(most, HUGE_VAL);
  histogram.seconds.assign(count, 0.0);
  for (const double value : values) histogram.seconds[bins.of(value)] += 1.0;
  for (double& seconds : histogram.seconds) seconds *= interval_s;
  return histogram;
}

}  // namespace

TravelUse travel_use(std::span<const double> travel_m, std::span<const std::uint8_t> counted,
                     double interval_s, double stroke_m) {
  if (!(stroke_m > 0.0) || !std::isfinite(stroke_m))
    throw std::invalid_argument(
        fmt::format("stroke = {} m; must be positive and finite", stroke_m));
  const std::vector<double> values = counted_travel(travel_m, counted);
  TravelUse use;
  use.histogram = histogram_of(values, interval_s, stroke_m);
  if (values.empty()) return use;
  use.mean_m =
      std::accumulate(values.begin(), values.end(), 0.0) / static_cast<double>(values.size());
  use.max_m = *std::ranges::max_element(values);
  use.p50_m = core::quantile_of(values, 0.50);
  use.p95_m = core::quantile_of(values, 0.95);
  return use;
}

TravelUse travel_use(const run::Motion& motion, std::span<const std::uint8_t> counted,
                     double stroke_m) {
  return travel_use(motion.travel_m, counted, motion.time.interval_s(), stroke_m);
}

}  // namespace clickwise::bands
