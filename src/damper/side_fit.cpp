#include "side_fit.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/statistics.hpp"

namespace clickwise::damper {

namespace {

using Eigen::Index;
using Eigen::VectorXd;

constexpr double infinite = std::numeric_limits<double>::infinity();
constexpr double robust_knee_sigmas = 2.0;
constexpr double deviations_per_median = 1.4826;  // of a normal distribution
constexpr int most_rounds = 8;
// A port that no point tells: a hundredth of the force at this speed; common practice, no source.
constexpr double plausible_port_share = 0.01;
constexpr double plausible_port_at_m_s = 0.4;

double noise_n(double force_n, const DynoFitOptions& options) {
  return std::hypot(options.noise_share * force_n, options.noise_floor_n);
}

constexpr double exact_cost = 1e-12;  // in sigmas squared

LeastSquaresOptions to_tell_starts_apart() {
  LeastSquaresOptions options;
  options.cost_tolerance = 1e-4;
  options.parameter_tolerance = 1e-3;
  options.exact_cost = exact_cost;
  options.most_evaluations = 100;
  options.most_rounds = 2;
  return options;
}

LeastSquaresOptions to_the_end() {
  LeastSquaresOptions options;
  options.cost_tolerance = 1e-12;
  options.parameter_tolerance = 1e-10;
  options.exact_cost = exact_cost;
  options.most_evaluations = 400;
  options.most_rounds = 4;
  return options;
}

LeastSquaresSummary best_of_starts(const std::vector<SidePoint>& points, const SideLayout& layout,
                                   const SideWeights& weights) {
  LeastSquaresProblem problem = problem_of(points, layout, weights);
  LeastSquaresSummary best;
  best.residual_sum_of_squares = infinite;
  for (const VectorXd& start : starts_of(points, layout)) {
    problem.start = start;
    LeastSquaresSummary found = least_squares(problem, to_tell_starts_apart());
    if (found.residual_sum_of_squares < best.residual_sum_of_squares) best = std::move(found);
  }
  return best;
}

// Robust scale of residuals in sigmas. The noise as it was said counts like ten more points, so
// that few points, which the law can follow closely, do not make their neighbours misfits.
double scale_of(const std::vector<double>& sizes, double parameters) {
  constexpr double said_counts = 10.0;
  if (sizes.empty()) return 1.0;
  const double count = static_cast<double>(sizes.size());
  const double freedom = std::max(1.0, count - parameters);
  const double seen = deviations_per_median * core::median(sizes);
  return std::sqrt((count * seen * seen + said_counts) / (freedom + said_counts));
}

// The scale is taken apart for points that the noise's floor rules and those that its share rules:
// where one of the two was guessed wrongly, the others keep their own scale.
void take_residuals(const std::vector<SidePoint>& points, const DynoFitOptions& options,
                    FittedSide& side) {
  const double floor_rules_below_n = options.noise_floor_n / options.noise_share;
  std::vector<double> large_sizes, small_sizes;
  std::vector<bool> small;
  for (std::size_t i = 0; i < points.size(); ++i) {
    const double force_n =
        side.layout.law(side.found.parameters, points[i]).force_n(points[i].speed_m_s);
    side.residual_n[i] = force_n - points[i].force_n;
    side.sigma_n[i] = noise_n(force_n, options);
    small.push_back(force_n < floor_rules_below_n);
    (small.back() ? small_sizes : large_sizes)
        .push_back(std::abs(side.residual_n[i]) / side.sigma_n[i]);
  }
  const auto parameters = static_cast<double>(side.layout.size);
  const double large_share =
      static_cast<double>(large_sizes.size()) / static_cast<double>(points.size());
  const double of_large = scale_of(large_sizes, parameters * large_share);
  const double of_small =
      std::max(of_large, scale_of(small_sizes, parameters * (1.0 - large_share)));
  for (std::size_t i = 0; i < points.size(); ++i) side.scale[i] = small[i] ? of_small : of_large;
}

// False when so many points would be set aside that the rest could not fix the parameters.
bool set_misfits_aside(const DynoFitOptions& options, FittedSide& side) {
  std::vector<bool> fits;
  for (std::size_t i = 0; i < side.fits.size(); ++i)
    fits.push_back(std::abs(side.residual_n[i]) <=
                   options.misfit_sigmas * side.scale[i] * side.sigma_n[i]);
  const auto left = static_cast<Index>(std::count(fits.begin(), fits.end(), true));
  if (left <= side.layout.size) return false;
  const bool same = fits == side.fits;
  side.fits = std::move(fits);
  return !same;
}

void hold_valve(const SideLayout& layout, LeastSquaresProblem& problem) {
  for (const Index at : {layout.valve, layout.slope, layout.valve_span})
    if (at >= 0) problem.lower[at] = problem.upper[at] = problem.start[at];
}

void refine(const std::vector<SidePoint>& points, const DynoFitOptions& options, FittedSide& side) {
  for (int round = 0; round < most_rounds; ++round) {
    take_residuals(points, options, side);
    const bool changed = set_misfits_aside(options, side);
    if (round > 1 && !changed) break;
    const SideWeights weights{side.sigma_n, side.fits, infinite};
    LeastSquaresProblem problem = problem_of(points, side.layout, weights);
    problem.start = side.found.parameters;
    if (side.layout.valve_held) hold_valve(side.layout, problem);
    side.found = least_squares(problem, to_the_end());
  }
  take_residuals(points, options, side);
}

}  // namespace

FittedSide fit_side(const std::vector<SidePoint>& points, const DynoFitOptions& options) {
  FittedSide side;
  const auto fastest = std::max_element(
      points.begin(), points.end(),
      [](const SidePoint& a, const SidePoint& b) { return a.speed_m_s < b.speed_m_s; });
  side.layout = layout_of(points, fastest->speed_m_s >= options.port_needs_m_s);
  side.fits.assign(points.size(), true);
  side.residual_n.resize(points.size());
  side.scale.resize(points.size());
  for (const SidePoint& point : points) side.sigma_n.push_back(noise_n(point.force_n, options));
  side.found = best_of_starts(points, side.layout, {side.sigma_n, side.fits, robust_knee_sigmas});
  if (side.layout.port < 0) {
    const SidePoint middle{plausible_port_at_m_s, 0.0, 0.5, 0.5, 0};
    const double force_n =
        side.layout.law(side.found.parameters, middle).force_n(plausible_port_at_m_s);
    side.layout.fixed_port_n_s2_m2 =
        plausible_port_share * force_n / (plausible_port_at_m_s * plausible_port_at_m_s);
  }
  if (!seen_by(points, side.layout, side.found.parameters).valve)
    hold_valve_shut(points, side.layout, side.found.parameters);
  refine(points, options, side);
  return side;
}

double force_error_n(const FittedSide& side, const SidePoint& point) {
  const VectorXd& p = side.found.parameters;
  VectorXd slope = VectorXd::Zero(p.size());
  for (Index j = 0; j < p.size(); ++j) {
    const double error = side.found.standard_error(j);
    if (std::isnan(error)) continue;
    const double step = std::max(1e-4 * error, 1e-9 * std::abs(p[j]));
    VectorXd more = p;
    more[j] += step;
    slope[j] = (side.layout.law(more, point).force_n(point.speed_m_s) -
                side.layout.law(p, point).force_n(point.speed_m_s)) /
               step;
  }
  const Eigen::MatrixXd covariance =
      side.found.covariance.unaryExpr([](double c) { return std::isnan(c) ? 0.0 : c; });
  return std::sqrt(std::max(0.0, slope.dot(covariance * slope)));
}

Estimate estimate(const LeastSquaresSummary& found, const std::vector<Index>& which) {
  Estimate sum{.at_bound = true};
  double variance = 0.0;
  for (const Index i : which) {
    sum.value += found.parameters[i];
    sum.at_bound = sum.at_bound && found.at_bound[static_cast<std::size_t>(i)];
    for (const Index j : which) {
      if (found.at_bound[static_cast<std::size_t>(i)] ||
          found.at_bound[static_cast<std::size_t>(j)])
        continue;
      variance += found.covariance(i, j);
    }
  }
  sum.standard_error = std::sqrt(variance);
  return sum;
}

}  // namespace clickwise::damper
