// Many settings over the same ground at once: one lane a setting, counted on the fly.
// docs/method/replay.md, R10 to R12.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/sim/inverse.hpp"

namespace clickwise::sim {

// Directions, where a figure has both: [0] compression (zero velocity included), [1] rebound.
inline constexpr std::size_t directions = 2;

struct TallyPlan {
  double interval_s = 0.0;                             // of the samples
  std::array<double, directions> split_m_s{0.7, 0.7};  // > 0; a speed at it is low
  std::array<double, directions> tail_m_s{1.0, 1.0};   // > 0; time above is counted per block
  double tail_travel_m = 0.1;                          // the same for travel
  double stroke_m = 0.0;                               // > 0
  double bottom_out_within_m = 4e-3;
  double top_out_within_m = 3e-3;
  double top_out_least_m_s = 0.25;
  double block_s = 5.0;  // of the whole ride's time, counted or not
};

// Sums over the counted samples of a block of the ride. Samples, not seconds, where not joules.
struct BlockTally {
  double samples = 0.0;
  std::array<double, directions> moving{};  // samples in the direction
  std::array<double, directions> high{};
  std::array<double, directions> tail{};
  std::array<double, directions> low_j{};
  std::array<double, directions> high_j{};
  double travel_m = 0.0;  // sum
  double tail_travel = 0.0;
  double bottom_outs = 0.0;
  double top_outs = 0.0;
};

// One lane's ride.
struct Tally {
  static constexpr double speed_cell_m_s = 0.01;
  static constexpr std::size_t speed_cells = 1024;  // the last holds everything faster
  static constexpr double travel_cell_m = 5e-4;

  std::array<std::vector<std::uint32_t>, directions> speed;  // samples per cell of |v|
  std::vector<std::uint32_t> travel;  // from -8 cells to past the stroke; outermost hold the rest
  std::array<double, directions> max_m_s{};
  double max_travel_m = 0.0;
  std::vector<BlockTally> blocks;
  std::vector<run::EndStop> bottom_outs;  // t_s from the ride's first sample
  std::vector<run::EndStop> top_outs;

  BlockTally total() const;
  // Straight within the cell. NaN when the direction has no time.
  double speed_quantile_m_s(std::size_t direction, double p) const;
  double travel_quantile_m(double p) const;
  double share_below_travel(double travel_m) const;
};

// A stretch of the ride that is replayed: its ground, where it begins, and which of its samples
// count (nonzero), one more than forcing.steps() / substeps.
struct LaneStretch {
  Forcing forcing;
  std::size_t first_sample = 0;
  std::vector<std::uint8_t> counted;
};

// Counts a recorded series in the same way: samples [first_sample, first_sample + counted.size())
// of the ride, one tally over all stretches. Joules are of the curve.
struct SeriesStretch {
  std::span<const double> travel_m;
  std::span<const double> velocity_m_s;
  std::size_t first_sample = 0;
  std::span<const std::uint8_t> counted;
};
Tally count_series(std::span<const SeriesStretch> stretches, const damper::Curve& curve,
                   const TallyPlan& plan);

// Rides each end over every stretch; tally i is of ends[i]. Single precision: shares differ from
// ride_forward's by less than 2e-4, mean travel by less than 0.02 mm. `ends` share stroke, linkage
// and stops. Single-threaded; lanes go in groups of lane_width. About 16 ns a lane and step with
// AVX2, counting included.
inline constexpr std::size_t lane_width = 16;
std::vector<Tally> ride_lanes(std::span<const VehicleEnd> ends,
                              std::span<const LaneStretch> stretches, const TallyPlan& plan);

}  // namespace clickwise::sim
