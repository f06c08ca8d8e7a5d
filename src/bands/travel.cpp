#include "clickwise/bands/travel.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "clickwise/core/statistics.hpp"

namespace clickwise::bands {

namespace {

// The counted part of a ride's travel.
class CountedTravel {
public:
  CountedTravel(std::span<const double> travel_m, std::span<const std::uint8_t> counted)
      : travel_m_(travel_m), counted_(counted) {
    if (travel_m.size() != counted.size())
      throw std::invalid_argument(fmt::format("counted = {} samples; must be as many as travel, {}",
                                              counted.size(), travel_m.size()));
  }

  template <typename Use>
  void each(Use use) const {
    for (std::size_t i = 0; i < counted_.size(); ++i)
      if (counted_[i] != 0 && std::isfinite(travel_m_[i])) use(travel_m_[i]);
  }

private:
  std::span<const double> travel_m_;
  std::span<const std::uint8_t> counted_;
};

struct Extent {
  double least_m = 0.0;
  double most_m = 0.0;
  double sum_m = 0.0;
  std::size_t samples = 0;
};

Extent extent_of(const CountedTravel& travel) {
  Extent extent;
  travel.each([&](double x) {
    extent.least_m = extent.samples > 0 ? std::min(extent.least_m, x) : x;
    extent.most_m = extent.samples > 0 ? std::max(extent.most_m, x) : x;
    extent.sum_m += x;
    ++extent.samples;
  });
  return extent;
}

// First and last bin, counted from full extension; the samples beyond them belong to them.
struct Bins {
  double per_m;
  double width_m;
  double first;
  double last;

  // Rounded down by hand: std::floor is a call where the oldest machines of a family have no
  // instruction for it.
  std::size_t of(double value_m) const {
    const double place = std::clamp(value_m * per_m, first, last);
    const auto towards_zero = static_cast<long long>(place);
    const long long below = towards_zero - (place < static_cast<double>(towards_zero) ? 1 : 0);
    return static_cast<std::size_t>(below - static_cast<long long>(first));
  }
};

Bins bins_over(double least_m, double most_m, double stroke_m) {
  const double width = std::max(std::min(1e-3, stroke_m / 100.0), stroke_m / 2000.0);
  const double beyond = std::ceil(0.25 * stroke_m / width);
  const double in_stroke = std::ceil(stroke_m / width * (1.0 - 1e-9));
  return {1.0 / width, width, std::clamp(std::floor(least_m / width), -beyond, 0.0),
          std::clamp(std::floor(most_m / width), in_stroke - 1.0, in_stroke + beyond)};
}

TravelHistogram empty_histogram(const Bins& bins, const Extent& extent) {
  const auto count = static_cast<std::size_t>(bins.last - bins.first) + 1;
  TravelHistogram histogram;
  for (std::size_t i = 0; i <= count; ++i)
    histogram.edges_m.push_back((bins.first + static_cast<double>(i)) * bins.width_m);
  histogram.edges_m.front() = std::min(histogram.edges_m.front(), extent.least_m);
  if (extent.most_m >= histogram.edges_m.back())
    histogram.edges_m.back() = std::nextafter(extent.most_m, HUGE_VAL);
  histogram.seconds.assign(count, 0.0);
  return histogram;
}

}  // namespace

TravelUse travel_use(std::span<const double> travel_m, std::span<const std::uint8_t> counted,
                     double interval_s, double stroke_m) {
  if (!(stroke_m > 0.0) || !std::isfinite(stroke_m))
    throw std::invalid_argument(
        fmt::format("stroke = {} m; must be positive and finite", stroke_m));
  const CountedTravel travel(travel_m, counted);
  const Extent extent = extent_of(travel);
  const Bins bins = bins_over(extent.least_m, extent.most_m, stroke_m);
  TravelUse use;
  use.histogram = empty_histogram(bins, extent);
  std::vector<double>& seconds = use.histogram.seconds;
  if (extent.samples == 0) return use;
  travel.each([&](double x) { seconds[bins.of(x)] += 1.0; });
  core::BinnedQuantile half(seconds, 0.50);
  core::BinnedQuantile most(seconds, 0.95);
  travel.each([&](double x) {
    const std::size_t bin = bins.of(x);
    if (bin >= half.first() && bin <= half.last()) half.add(x);
    if (bin >= most.first() && bin <= most.last()) most.add(x);
  });
  for (double& value : seconds) value *= interval_s;
  use.mean_m = extent.sum_m / static_cast<double>(extent.samples);
  use.max_m = extent.most_m;
  use.p50_m = half.value();
  use.p95_m = most.value();
  return use;
}

TravelUse travel_use(const run::Motion& motion, std::span<const std::uint8_t> counted,
                     double stroke_m) {
  return travel_use(motion.travel_m, counted, motion.time.interval_s(), stroke_m);
}

}  // namespace clickwise::bands
