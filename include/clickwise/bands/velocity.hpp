// How the riding time is spread over shaft velocity, and the low- and high-speed bands of each
// direction. docs/method/bands.md, equations B1 to B6.
#pragma once

#include <cstdint>
#include <functional>
#include <limits>
#include <optional>
#include <span>
#include <vector>

#include "clickwise/core/density.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::bands {

// Signed damper force (N) over signed shaft velocity (m/s), compression positive in both.
using ForceCurve = std::function<double(double)>;

// The speed that parts low from high, m/s, > 0 and finite. A speed exactly at it is low-speed.
struct Splits {
  double compression_m_s = 0.0;
  double rebound_m_s = 0.0;
};

struct VelocityOptions {
  double bin_m_s = 0.01;            // grid of the histogram, aligned to 0; > 0
  double even_up_to_m_s = 8.0;      // beyond it each bin is twice as wide as the one before
  double density_cell_m_s = 0.005;  // cells of the densities; > 0

  // Throws std::invalid_argument, "name = value; must be ...".
  void validate() const;
};

// Bin i lies between edges_m_s[i] and edges_m_s[i + 1] (ascending, rebound negative) and holds the
// edge that is farther from zero; exactly zero is in the first compression bin. 0, the compression
// split and minus the rebound split are edges exactly, whether or not the grid has them, so a sum
// over bins is a sum over a band. The bins reach from the fastest rebound to the fastest
// compression sample, and at least to the splits: no sample is lost.
struct VelocityHistogram {
  std::vector<double> edges_m_s;
  std::vector<double> seconds;
  std::vector<double> metres;  // shaft distance
  std::vector<double> joules;  // taken by the damper; empty without a force curve
};

// One direction. Quantiles (type 7) and the maximum are of speed, over the time counted in this
// direction, NaN when there was none.
struct Band {
  double split_m_s = 0.0;
  double low_s = 0.0;
  double high_s = 0.0;
  double low_m = 0.0;
  double high_m = 0.0;
  std::optional<double> low_j;  // empty without a force curve
  std::optional<double> high_j;
  double p50_m_s = std::numeric_limits<double>::quiet_NaN();
  double p95_m_s = std::numeric_limits<double>::quiet_NaN();
  double max_m_s = std::numeric_limits<double>::quiet_NaN();
};

// Seconds over speed (m/s, >= 0) in each direction; each cell at the mean of the speeds in it.
struct SpeedDensities {
  core::Density compression;
  core::Density rebound;
};

struct VelocityBands {
  VelocityHistogram histogram;
  Band compression;
  Band rebound;
  SpeedDensities density;
};

// Takes every sample with counted != 0 (riding and valid) and a finite velocity for one interval.
// velocity_m_s and counted have the same size. low_s + high_s over both directions is the counted
// time to rounding. Work is the integral of F(v) v; the curve is sampled every 1 mm/s up to 20 m/s
// and straight between, which costs less than 1e-6 of the work of smooth laws, and called for each
// sample beyond. An empty curve gives no joules. O(samples); a non-finite force counts as none.
// Throws std::invalid_argument for a split that is not positive and finite, or sizes that differ.
VelocityBands velocity_bands(std::span<const double> velocity_m_s,
                             std::span<const std::uint8_t> counted, double interval_s,
                             const Splits& splits, const ForceCurve& force_n = {},
                             const VelocityOptions& options = {});

// The same over a motion's own samples.
VelocityBands velocity_bands(const run::Motion& motion, std::span<const std::uint8_t> counted,
                             const Splits& splits, const ForceCurve& force_n = {},
                             const VelocityOptions& options = {});

// Only the densities: for the window of a symptom, given as the mask `counted`.
SpeedDensities speed_densities(std::span<const double> velocity_m_s,
                               std::span<const std::uint8_t> counted, double interval_s,
                               double cell_m_s = VelocityOptions{}.density_cell_m_s);

}  // namespace clickwise::bands
