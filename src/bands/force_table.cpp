#include "force_table.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::bands {

namespace {
constexpr double just_above_rest_m_s = 1e-9;
}

ForceTable::ForceTable(const ForceCurve& force_n, double direction, double fastest_m_s)
    : force_n_(force_n), direction_(direction) {
  const double up_to = std::min(fastest_m_s, table_up_to_m_s);
  const auto cells = static_cast<int>(up_to * nodes_per_m_s) + 1;
  nodes_.push_back(exact(just_above_rest_m_s));
  for (int i = 1; i <= cells; ++i) nodes_.push_back(exact(i / nodes_per_m_s));
}

double ForceTable::exact(double speed_m_s) const {
  const double force = direction_ * force_n_(direction_ * speed_m_s);
  return std::isfinite(force) ? force : 0.0;
}

}  // namespace clickwise::bands
