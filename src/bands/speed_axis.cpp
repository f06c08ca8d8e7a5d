#include "speed_axis.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::bands {

namespace {

// Doubling 64 times from 8 m/s passes every speed that a reading could mean; one more bin takes the
// rest, so that a corrupt value widens the histogram by no more than that.
constexpr int most_doublings = 64;

// Ends strictly above up_to_m_s where the even grid does.
std::vector<double> grid(double up_to_m_s, const VelocityOptions& options) {
  const double even = std::min(up_to_m_s, options.even_up_to_m_s);
  const auto cells = static_cast<long>(even / options.bin_m_s) + 1;
  std::vector<double> edges;
  for (long i = 0; i <= cells; ++i) edges.push_back(static_cast<double>(i) * options.bin_m_s);
  for (int i = 0; i < most_doublings && edges.back() < up_to_m_s; ++i)
    edges.push_back(2.0 * edges.back());
  if (edges.back() < up_to_m_s) edges.push_back(up_to_m_s);
  return edges;
}

}  // namespace

SpeedAxis::SpeedAxis(double split_m_s, double fastest_m_s, const VelocityOptions& options)
    : cells_per_m_s_(1.0 / options.bin_m_s),
      edges_(grid(std::max(split_m_s, fastest_m_s), options)) {
  const double even_end = std::min(options.even_up_to_m_s, edges_.back());
  const auto cells = static_cast<std::size_t>(std::ceil(even_end * cells_per_m_s_)) + 1;
  insert_split(split_m_s, 1e-6 * options.bin_m_s);
  std::size_t bin = 0;
  for (std::size_t cell = 0; cell < cells; ++cell) {
    const double cell_begin = static_cast<double>(cell) * options.bin_m_s * (1.0 - 1e-9);
    while (bin + 1 < bins() && edges_[bin + 1] < cell_begin) ++bin;
    first_of_cell_.push_back(bin);
  }
}

void SpeedAxis::insert_split(double split_m_s, double tolerance_m_s) {
  auto place = std::lower_bound(edges_.begin() + 1, edges_.end(), split_m_s - tolerance_m_s);
  if (place != edges_.end() && std::abs(*place - split_m_s) <= tolerance_m_s)
    *place = split_m_s;
  else
    place = edges_.insert(place, split_m_s);
  first_high_ = static_cast<std::size_t>(place - edges_.begin());
}

std::size_t SpeedAxis::bin(double speed_m_s) const {
  const double place = speed_m_s * cells_per_m_s_;
  const auto last = first_of_cell_.size() - 1;
  const std::size_t cell =
      place < static_cast<double>(last) ? static_cast<std::size_t>(place) : last;
  std::size_t bin = first_of_cell_[cell];
  while (bin + 1 < bins() && speed_m_s > edges_[bin + 1]) ++bin;
  return bin;
}

}  // namespace clickwise::bands
