#include "clickwise/damper/reach.hpp"

#include <cmath>

namespace clickwise::damper {

namespace {

const Law& side(const Curve& curve, bike::Adjuster adjuster) {
  return bike::acts_in_compression(adjuster) ? curve.compression : curve.rebound;
}

}  // namespace

Reach reach(const Damper& damper, bike::Adjuster adjuster, const RideDensity& density,
            double split_m_s) {
  Reach result{.adjuster = adjuster};
  const auto range = damper.adjuster(adjuster);
  if (!range) return result;
  const int other = range->setting > 0 ? range->setting - 1 : 1;
  const Curve now = damper.curve();
  const Curve then = damper.curve_with(adjuster, other);
  const core::Density& t =
      bike::acts_in_compression(adjuster) ? density.compression : density.rebound;
  double low_work_j = 0.0;
  double high_work_j = 0.0;
  for (std::size_t i = 0; i < t.at.size(); ++i) {
    const double v = t.at[i];
    const double metres = v * t.weight[i];
    const double force_n = side(now, adjuster).force_n(v);
    const bool low = v <= split_m_s;
    (low ? result.low_j : result.high_j) +=
        std::abs(side(then, adjuster).force_n(v) - force_n) * metres;
    (low ? low_work_j : high_work_j) += force_n * metres;
  }
  if (low_work_j > 0.0) result.low_share = result.low_j / low_work_j;
  if (high_work_j > 0.0) result.high_share = result.high_j / high_work_j;
  return result;
}

}  // namespace clickwise::damper
