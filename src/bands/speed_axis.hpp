// The bins of one direction, over speed. Private to bands.
#pragma once

#include <cstddef>
#include <vector>

#include "clickwise/bands/velocity.hpp"

namespace clickwise::bands {

// Bin i holds speeds in (edges[i], edges[i + 1]]; the first one holds 0 too. The edges are the even
// grid, then doubling bins, with the split among them; the last edge is at or above the fastest.
class SpeedAxis {
public:
  SpeedAxis(double split_m_s, double fastest_m_s, const VelocityOptions& options);

  const std::vector<double>& edges() const { return edges_; }
  std::size_t bins() const { return edges_.size() - 1; }

  // Bins below it are low-speed.
  std::size_t first_high() const { return first_high_; }

  // For 0 <= speed <= the fastest.
  std::size_t bin(double speed_m_s) const;

private:
  void insert_split(double split_m_s, double tolerance_m_s);

  double cells_per_m_s_;
  std::vector<double> edges_;
  std::vector<std::size_t> first_of_cell_;  // a bin at or before every speed of that even cell
  std::size_t first_high_ = 0;
};

}  // namespace clickwise::bands
