// An input with no sensor on it: readings that ask for impossible accelerations all the time.
#include <algorithm>
#include <cmath>

#include "fault_search.hpp"

namespace clickwise::motion {

namespace {

constexpr double block_s = 0.5;
constexpr double impossible_share = 0.25;  // of the samples of a block
constexpr double least_step_share =
    0.01;  // of the stroke: smaller steps are noise, not an open input
constexpr double margin = 1.5;

// Samples of [begin, end) whose second difference no suspension makes.
std::size_t impossible_samples(const FaultSearch& search, std::size_t begin, std::size_t end,
                               double limit_m) {
  const auto& x = search.travel_m;
  std::size_t count = 0;
  for (std::size_t i = begin + 1; i + 1 < end; ++i)
    if (std::abs(x[i - 1] - 2.0 * x[i] + x[i + 1]) > limit_m) ++count;
  return count;
}

}  // namespace

Masked mask_open_input(FaultSearch& search) {
  Masked masked;
  const double dt = search.interval_s();
  const double limit_m = std::max(margin * search.options.largest_acceleration_m_s2 * dt * dt,
                                  least_step_share * search.range.stroke_m);
  const std::size_t block = search.samples(block_s, 8);
  for (const run::Stretch& run : search.usable_runs()) {
    run::Stretch open{run.begin, run.begin};
    for (std::size_t begin = run.begin; begin < run.end; begin += block) {
      const std::size_t end = std::min(begin + block, run.end);
      const auto count = impossible_samples(search, begin, end, limit_m);
      if (static_cast<double>(count) > impossible_share * static_cast<double>(end - begin)) {
        if (open.begin == open.end) open.begin = begin;
        open.end = end;
      } else if (open.begin != open.end) {
        mask(search, open, masked);
        open = {end, end};
      }
    }
    if (open.begin != open.end) mask(search, open, masked);
  }
  return masked;
}

}  // namespace clickwise::motion
