// Where in its stroke an end spends the riding time. docs/method/bands.md, equation B7.
#pragma once

#include <cstdint>
#include <limits>
#include <span>
#include <vector>

#include "clickwise/run/motion.hpp"

namespace clickwise::bands {

// Bin i is [edges_m[i], edges_m[i + 1]). Bins are 1 mm wide (a hundredth of the stroke where that
// is less, a 2000th where that is more), aligned to full extension, from there to the stroke; a reading below 0 or beyond the
// stroke adds bins, and one more than a quarter of a stroke out widens the outermost bin.
struct TravelHistogram {
  std::vector<double> edges_m;
  std::vector<double> seconds;
};

// NaN figures and zero seconds when no time was counted.
struct TravelUse {
  double mean_m = std::numeric_limits<double>::quiet_NaN();
  double p50_m = std::numeric_limits<double>::quiet_NaN();  // type 7
  double p95_m = std::numeric_limits<double>::quiet_NaN();
  double max_m = std::numeric_limits<double>::quiet_NaN();
  TravelHistogram histogram;
};

// Takes every sample with counted != 0 and a finite travel for one interval. stroke_m > 0.
// Throws std::invalid_argument for a stroke that is not positive and finite, or sizes that differ.
TravelUse travel_use(std::span<const double> travel_m, std::span<const std::uint8_t> counted,
                     double interval_s, double stroke_m);

TravelUse travel_use(const run::Motion& motion, std::span<const std::uint8_t> counted,
                     double stroke_m);

}  // namespace clickwise::bands
