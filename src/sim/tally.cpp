#include <cmath>
#include <limits>

#include "clickwise/sim/lanes.hpp"

namespace clickwise::sim {

namespace {

constexpr double not_known = std::numeric_limits<double>::quiet_NaN();
constexpr double cells_below_zero = 8.0;

double samples_in(const std::vector<std::uint32_t>& cells) {
  double sum = 0.0;
  for (const std::uint32_t count : cells) sum += count;
  return sum;
}

// Position in cells below which the share p of the samples lies; NaN of nothing.
double quantile_cells(const std::vector<std::uint32_t>& cells, double p) {
  const double wanted = p * samples_in(cells);
  double below = 0.0;
  for (std::size_t i = 0; i < cells.size(); ++i) {
    const double here = cells[i];
    if (here > 0.0 && below + here >= wanted)
      return static_cast<double>(i) + (wanted - below) / here;
    below += here;
  }
  return not_known;
}

}  // namespace

BlockTally Tally::total() const {
  BlockTally sum;
  for (const BlockTally& block : blocks) {
    sum.samples += block.samples;
    for (std::size_t d = 0; d < directions; ++d) {
      sum.moving[d] += block.moving[d];
      sum.high[d] += block.high[d];
      sum.tail[d] += block.tail[d];
      sum.low_j[d] += block.low_j[d];
      sum.high_j[d] += block.high_j[d];
    }
    sum.travel_m += block.travel_m;
    sum.tail_travel += block.tail_travel;
    sum.bottom_outs += block.bottom_outs;
    sum.top_outs += block.top_outs;
  }
  return sum;
}

double Tally::speed_quantile_m_s(std::size_t direction, double p) const {
  return quantile_cells(speed[direction], p) * speed_cell_m_s;
}

double Tally::travel_quantile_m(double p) const {
  return (quantile_cells(travel, p) - cells_below_zero) * travel_cell_m;
}

double Tally::share_below_travel(double travel_m) const {
  const double place = travel_m / travel_cell_m + cells_below_zero;
  double below = 0.0;
  for (std::size_t i = 0; i < travel.size(); ++i) {
    const double part = place - static_cast<double>(i);
    below += travel[i] * (part >= 1.0 ? 1.0 : part > 0.0 ? part : 0.0);
  }
  return below / samples_in(travel);
}

}  // namespace clickwise::sim
