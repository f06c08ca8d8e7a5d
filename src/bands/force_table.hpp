// A force curve tabulated over speed in one direction. Private to bands.
#pragma once

#include <vector>

#include "clickwise/bands/velocity.hpp"

namespace clickwise::bands {

// Force against the motion over speed >= 0: +F(v) in compression, -F(-v) in rebound. Straight
// between nodes; the node at 0 is the limit from above, so a friction step is not halved.
class ForceTable {
public:
  ForceTable(const ForceCurve& force_n, double direction, double fastest_m_s);

  double operator()(double speed_m_s) const {
    const double place = speed_m_s * nodes_per_m_s;
    if (!(place < static_cast<double>(nodes_.size() - 1))) return exact(speed_m_s);
    const auto i = static_cast<std::size_t>(place);
    return nodes_[i] + (place - static_cast<double>(i)) * (nodes_[i + 1] - nodes_[i]);
  }

private:
  static constexpr double nodes_per_m_s = 1000.0;
  static constexpr double table_up_to_m_s = 20.0;

  double exact(double speed_m_s) const;

  const ForceCurve& force_n_;
  double direction_;
  std::vector<double> nodes_;
};

}  // namespace clickwise::bands
