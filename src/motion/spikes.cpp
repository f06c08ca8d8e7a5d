// A few samples that leave the travel and come back.
#include <algorithm>
#include <cmath>

#include "clickwise/core/statistics.hpp"
#include "clickwise/signal/hampel.hpp"
#include "fault_search.hpp"
#include "lagrange.hpp"

namespace clickwise::motion {

namespace {

constexpr double noise_sigmas = 8.0;

// Eq. M7: white noise from the second differences, which hardly see the motion. So many of them,
// spread over the log, give it to a per cent.
constexpr std::size_t enough_bends = 30000;
double noise_m(const FaultSearch& search) {
  const auto& x = search.travel_m;
  const std::size_t stride = std::max<std::size_t>(1, x.size() / enough_bends);
  std::vector<double> bends;
  for (const run::Stretch& run : search.usable_runs())
    for (std::size_t i = run.begin + 1; i + 1 < run.end; i += stride)
      bends.push_back(std::abs(x[i - 1] - 2.0 * x[i] + x[i + 1]));
  return bends.empty() ? 0.0
                       : signal::mad_to_sigma * core::median(std::move(bends)) / std::sqrt(6.0);
}

// The smallest step between neighbours: one count.
double count_m(const FaultSearch& search) {
  double least = search.range.stroke_m;
  for (const run::Stretch& run : search.usable_runs())
    for (std::size_t i = run.begin; i + 1 < run.end; ++i) {
      const double step = std::abs(search.travel_m[i + 1] - search.travel_m[i]);
      if (step > 0.0) least = std::min(least, step);
    }
  return least;
}

class SpikeRule {
public:
  explicit SpikeRule(const FaultSearch& search)
      : search_(search),
        least_m_(std::max(noise_sigmas * noise_m(search), 4.0 * count_m(search))),
        longest_(search.samples(search.options.longest_spike_s, 3)) {}

  signal::HampelOptions hampel() const {
    signal::HampelOptions options;
    options.half_width = search_.samples(search_.options.spike_window_s, 3);
    options.threshold = search_.options.spike_threshold;
    options.least_scale = floor_m(1) / options.threshold;
    return options;
  }

  // Half the bend of the largest acceleration over the hole that the group would leave.
  double floor_m(std::size_t length) const {
    const double half_hole_s = 0.5 * static_cast<double>(length + 1) * search_.interval_s();
    return std::max(least_m_,
                    0.5 * search_.options.largest_acceleration_m_s2 * half_hole_s * half_hole_s);
  }

  // Eq. M8: is the group [begin, end) of `run` too short for a step, and off what its neighbours
  // lead to by more than the motion can be?
  bool confirms(run::Stretch group, run::Stretch run) const {
    const std::size_t length = group.end - group.begin;
    if (length > longest_ || group.begin == run.begin || group.end == run.end) return false;
    for (std::size_t i = group.begin; i < group.end; ++i)
      if (std::abs(search_.travel_m[i] - bridge(i, group, run)) > floor_m(length)) return true;
    return false;
  }

private:
  double bridge(std::size_t i, run::Stretch group, run::Stretch run) const {
    const auto at = [&](std::size_t k) {
      return Node{static_cast<double>(k), search_.travel_m[k]};
    };
    const Node a = at(group.begin - 1), b = at(group.end);
    const auto place = static_cast<double>(i);
    if (group.begin < run.begin + 2 || group.end + 1 >= run.end) return straight(a, b, place);
    return cubic({at(group.begin - 2), a, b, at(group.end + 1)}, place);
  }

  const FaultSearch& search_;
  double least_m_;
  std::size_t longest_;
};

// Where some bend is larger than `bend_m`, with `around` samples on each side: the rest of a ride
// cannot hold a spike and is not searched.
std::vector<run::Stretch> bent_stretches(const FaultSearch& search, run::Stretch run, double bend_m,
                                         std::size_t around) {
  const auto& x = search.travel_m;
  std::vector<run::Stretch> bent;
  for (std::size_t i = run.begin + 1; i + 1 < run.end; ++i) {
    if (!(std::abs(x[i - 1] - 2.0 * x[i] + x[i + 1]) > bend_m)) continue;
    const run::Stretch here{i - std::min(around, i - run.begin), std::min(i + around, run.end)};
    if (!bent.empty() && here.begin <= bent.back().end)
      bent.back().end = here.end;
    else
      bent.push_back(here);
  }
  return bent;
}

// Eq. M6: the values less the running median of their steps, summed up. A hit's slope goes, a
// spike, whose steps are outliers of their window, stays.
std::vector<double> without_slope(std::span<const double> values, std::size_t half_width) {
  std::vector<double> steps(values.size() - 1);
  for (std::size_t i = 0; i + 1 < values.size(); ++i) steps[i] = values[i + 1] - values[i];
  std::vector<double> level(values.begin(), values.end());
  double slope_sum = 0.0;
  for (std::size_t i = 0; i < steps.size(); ++i) {
    const std::size_t begin = i - std::min(i, half_width);
    const std::size_t end = std::min(i + half_width + 1, steps.size());
    slope_sum +=
        core::median(std::vector<double>(steps.begin() + static_cast<std::ptrdiff_t>(begin),
                                         steps.begin() + static_cast<std::ptrdiff_t>(end)));
    level[i + 1] -= slope_sum;
  }
  return level;
}

}  // namespace

Masked mask_spikes(FaultSearch& search) {
  Masked masked;
  const SpikeRule rule(search);
  const signal::HampelOptions hampel = rule.hampel();
  for (const run::Stretch& run : search.usable_runs()) {
    for (const run::Stretch& bent :
         bent_stretches(search, run, rule.floor_m(1), 4 * hampel.half_width)) {
      const auto suspects = signal::hampel_spikes(
          without_slope(std::span(search.travel_m).subspan(bent.begin, bent.end - bent.begin),
                        hampel.half_width),
          hampel);
      for (std::size_t k = 0; k < suspects.size();) {
        run::Stretch group{bent.begin + suspects[k], bent.begin + suspects[k] + 1};
        while (++k < suspects.size() && bent.begin + suspects[k] == group.end) ++group.end;
        if (rule.confirms(group, run)) mask(search, group, masked);
      }
    }
  }
  return masked;
}

}  // namespace clickwise::motion
