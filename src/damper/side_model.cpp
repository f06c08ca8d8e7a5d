#include "side_model.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/statistics.hpp"

namespace clickwise::damper {

namespace {

using Eigen::Index;
using Eigen::VectorXd;

constexpr double shut_over_largest = 1.2;  // opening force of a valve that no point opens

template <class Get>
bool varies(const std::vector<SidePoint>& points, Get get) {
  return std::any_of(points.begin(), points.end(),
                     [&](const SidePoint& point) { return get(point) != get(points.front()); });
}

// Sizes that the points show, for starts and bounds.
struct Scales {
  double fastest_m_s = 0.0;
  double median_m_s = 0.0;
  double largest_n = 0.0;
  double median_n = 0.0;
  double bleed_m_s = 0.0;  // the median of v sqrt(100 / F) over the slower half
  double fast_n = 0.0;     // median force of the fastest tenth
};

Scales scales_of(std::vector<SidePoint> points) {
  std::sort(points.begin(), points.end(),
            [](const SidePoint& a, const SidePoint& b) { return a.speed_m_s < b.speed_m_s; });
  std::vector<double> forces, bleeds, fast;
  const std::size_t count = points.size();
  for (std::size_t i = 0; i < count; ++i) {
    const double force_n = std::max(std::abs(points[i].force_n), 1e-3);
    forces.push_back(force_n);
    if (2 * i < count + 1) bleeds.push_back(points[i].speed_m_s * std::sqrt(100.0 / force_n));
    if (10 * (count - i) <= count + 9) fast.push_back(force_n);
  }
  return {points.back().speed_m_s,
          points[count / 2].speed_m_s,
          *std::max_element(forces.begin(), forces.end()),
          core::median(forces),
          core::median(bleeds),
          core::median(fast)};
}

// sign(r) sqrt(2 k^2 (sqrt(1 + (r/k)^2) - 1)): its square grows like r^2 near 0 and like |r| far
// away (the pseudo-Huber loss).
double softened(double r, double knee) {
  if (std::isinf(knee)) return r;
  const double x = r / knee;
  return std::copysign(knee * std::abs(x) * std::sqrt(2.0 / (1.0 + std::sqrt(1.0 + x * x))), r);
}

}  // namespace

Law SideLayout::law(const VectorXd& p, const SidePoint& point) const {
  Law law{p[bleed], p[valve], p[slope], port >= 0 ? p[port] : fixed_port_n_s2_m2};
  if (bleed_span >= 0) law.bleed_m_s += p[bleed_span] * point.bleed_out;
  if (valve_span >= 0) law.opening_n += p[valve_span] * (1.0 - point.valve_out);
  return law;
}

SideLayout layout_of(const std::vector<SidePoint>& points, bool with_port) {
  SideLayout layout;
  if (varies(points, [](const SidePoint& point) { return point.bleed_out; }))
    layout.bleed_span = layout.size++;
  if (varies(points, [](const SidePoint& point) { return point.valve_out; }))
    layout.valve_span = layout.size++;
  if (with_port) layout.port = layout.size++;
  return layout;
}

LeastSquaresProblem problem_of(const std::vector<SidePoint>& points, const SideLayout& layout,
                               const SideWeights& weights) {
  LeastSquaresProblem problem;
  problem.count = static_cast<Index>(std::count(weights.use.begin(), weights.use.end(), true));
  problem.residuals = [&points, &layout, &weights](const VectorXd& p, VectorXd& f) {
    Index at = 0;
    for (std::size_t i = 0; i < points.size(); ++i) {
      if (!weights.use[i]) continue;
      const double force_n = layout.law(p, points[i]).force_n(points[i].speed_m_s);
      f[at++] = softened((force_n - points[i].force_n) / weights.sigma_n[i], weights.knee);
    }
  };
  const Scales scales = scales_of(points);
  problem.lower = VectorXd::Zero(layout.size);
  problem.lower[layout.slope] = 1e-3 * scales.largest_n / scales.fastest_m_s;
  problem.upper = VectorXd::Constant(layout.size, 3.0 * scales.largest_n);
  problem.upper[layout.slope] = 1e3 * scales.largest_n / scales.fastest_m_s;
  problem.upper[layout.bleed] = 1e3 * scales.bleed_m_s;
  if (layout.bleed_span >= 0) problem.upper[layout.bleed_span] = 1e3 * scales.bleed_m_s;
  if (layout.port >= 0)
    problem.upper[layout.port] = 2.0 * scales.largest_n / (scales.fastest_m_s * scales.fastest_m_s);
  return problem;
}

Seen seen_by(const std::vector<SidePoint>& points, const SideLayout& layout, const VectorXd& p) {
  constexpr double least_share = 0.05;
  Seen seen;
  for (const SidePoint& point : points) {
    const Law law = layout.law(p, point);
    const double v = point.speed_m_s;
    const double F_p = std::max(0.0, law.force_n(v) - law.port_n_s2_m2 * v * v);
    const double through_bleed = law.bleed_m_s * std::sqrt(F_p / 100.0) / v;
    seen.bleed = seen.bleed || through_bleed > least_share;
    seen.valve = seen.valve || through_bleed < 1.0 - least_share;
  }
  return seen;
}

void hold_valve_shut(const std::vector<SidePoint>& points, SideLayout& layout, VectorXd& p) {
  const Scales scales = scales_of(points);
  layout.valve_held = true;
  p[layout.valve] = shut_over_largest * scales.largest_n;
  p[layout.slope] = scales.largest_n / scales.fastest_m_s;
  if (layout.valve_span >= 0) p[layout.valve_span] = 0.0;
}

std::vector<VectorXd> starts_of(const std::vector<SidePoint>& points, const SideLayout& layout) {
  const Scales scales = scales_of(points);
  const double never_n = shut_over_largest * scales.largest_n;
  std::vector<VectorXd> starts;
  for (const double opening_n :
       {0.15 * scales.median_n, 0.5 * scales.median_n, 0.9 * scales.median_n, never_n}) {
    for (const double bleed : {0.5, 2.0}) {
      VectorXd p = VectorXd::Zero(layout.size);
      p[layout.bleed] = bleed * scales.bleed_m_s * (layout.bleed_span >= 0 ? 0.3 : 1.0);
      p[layout.valve] = opening_n * (layout.valve_span >= 0 && opening_n < never_n ? 0.6 : 1.0);
      p[layout.slope] =
          std::max(scales.fast_n - opening_n, 0.1 * scales.fast_n) / scales.fastest_m_s;
      if (layout.bleed_span >= 0) p[layout.bleed_span] = 1.4 * bleed * scales.bleed_m_s;
      if (layout.valve_span >= 0) p[layout.valve_span] = 0.8 * opening_n;
      if (layout.port >= 0)
        p[layout.port] = 0.2 * scales.fast_n / (scales.fastest_m_s * scales.fastest_m_s);
      starts.push_back(p);
    }
  }
  return starts;
}

}  // namespace clickwise::damper
