#include "clickwise/damper/least_squares.hpp"

#include <fmt/format.h>

#include <Eigen/QR>
#include <Eigen/SVD>
#include <algorithm>
#include <cmath>
#include <limits>
#include <stdexcept>
#include <unsupported/Eigen/LevenbergMarquardt>

namespace clickwise::damper {

namespace {

using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

constexpr double nan = std::numeric_limits<double>::quiet_NaN();
constexpr double infinite = std::numeric_limits<double>::infinity();
constexpr double epsilon = std::numeric_limits<double>::epsilon();
constexpr double beyond_the_model = 1e100;  // in place of f where it is not finite
constexpr double most_relative_error = 1e3;
// Cosine between f and a column of J that passes for a right angle, with J by central differences.
constexpr double stationary_cosine = 1e-5;

void check(const char* name, double value, double least, double most) {
  if (!(value >= least && value <= most))
    throw std::invalid_argument(fmt::format("{} = {}; must be {} to {}", name, value, least, most));
}

// The problem as Eigen's method sees it: unbounded, finite, with a Jacobian.
class Bounded : public Eigen::DenseFunctor<double> {
public:
  explicit Bounded(const LeastSquaresProblem& problem)
      : DenseFunctor(static_cast<int>(problem.start.size()), static_cast<int>(problem.count)),
        problem_(problem),
        lower_(problem.lower),
        upper_(problem.upper) {
    const Index size = problem.start.size();
    if (lower_.size() == 0) lower_ = VectorXd::Constant(size, -infinite);
    if (upper_.size() == 0) upper_ = VectorXd::Constant(size, infinite);
    scale_ = inside(problem.start).cwiseAbs();
  }

  VectorXd inside(const VectorXd& p) const { return p.cwiseMax(lower_).cwiseMin(upper_); }

  int operator()(const VectorXd& p, VectorXd& f) const {
    ++evaluations_;
    f.resize(values());
    problem_.residuals(inside(p), f);
    if (!f.allFinite()) f.setConstant(beyond_the_model);
    return 0;
  }

  // Zero in the columns of parameters beyond a bound: there f does not change.
  int df(const VectorXd& p, MatrixXd& J) const {
    J.resize(values(), inputs());
    for (Index j = 0; j < p.size(); ++j) {
      if (p[j] < lower_[j] || p[j] > upper_[j] || lower_[j] == upper_[j])
        J.col(j).setZero();
      else
        J.col(j) = slope(inside(p), j);
    }
    return 0;
  }

  bool at_bound(const VectorXd& p, Index j) const { return p[j] <= lower_[j] || p[j] >= upper_[j]; }

  // Whether |f|^2 falls when p_j moves inwards from the bound it is at.
  bool falls_inwards(const VectorXd& p, Index j, double gradient) const {
    if (lower_[j] == upper_[j]) return false;
    return p[j] <= lower_[j] ? gradient < 0.0 : gradient > 0.0;
  }

  double scale(Index j) const { return scale_[j]; }
  int evaluations() const { return evaluations_; }

private:
  // Central difference; where a bound is nearer than the step, of second order from within.
  VectorXd slope(const VectorXd& p, Index j) const {
    const double h = std::cbrt(epsilon) * std::max({std::abs(p[j]), 1e-6 * scale_[j], 1e-12});
    if (p[j] - h >= lower_[j] && p[j] + h <= upper_[j])
      return (at(p, j, h) - at(p, j, -h)) / (2.0 * h);
    const double inwards = p[j] - h < lower_[j] ? h : -h;
    return (4.0 * at(p, j, inwards) - at(p, j, 2.0 * inwards) - 3.0 * at(p, j, 0.0)) /
           (2.0 * inwards);
  }

  VectorXd at(VectorXd p, Index j, double step) const {
    p[j] += step;
    VectorXd f(values());
    (*this)(p, f);
    return f;
  }

  const LeastSquaresProblem& problem_;
  VectorXd lower_;
  VectorXd upper_;
  VectorXd scale_;
  mutable int evaluations_ = 0;
};

struct Descent {
  bool ended = false;  // by itself, rather than for want of evaluations
  std::string reason;
};

Descent descend(Bounded& f, VectorXd& p, const LeastSquaresOptions& options) {
  Eigen::LevenbergMarquardt<Bounded> method(f);
  method.setFactor(options.first_step);
  method.setFtol(options.cost_tolerance);
  method.setXtol(options.parameter_tolerance);
  method.setGtol(0.0);
  method.setMaxfev(options.most_evaluations);
  using namespace Eigen::LevenbergMarquardtSpace;
  switch (method.minimize(p)) {
    case RelativeReductionTooSmall:
    case FtolTooSmall:
      return {true, "the sum of squares does not fall any further"};
    case RelativeErrorTooSmall:
    case XtolTooSmall:
    case RelativeErrorAndReductionTooSmall:
      return {true, "the parameters do not move any further"};
    case CosinusTooSmall:
    case GtolTooSmall:
      return {true, "the residuals stand at right angles to every direction"};
    case TooManyFunctionEvaluation:
      return {false, fmt::format("no end after {} evaluations", options.most_evaluations)};
    default:
      return {false, "the descent could not be carried on"};
  }
}

// The place where it stopped, and what can be said of it.
struct Standing {
  VectorXd f;
  MatrixXd J;
  std::vector<bool> fixed;  // at a bound, and the cost rises inwards
};

Standing stand(const Bounded& problem, const VectorXd& p) {
  Standing now;
  problem(p, now.f);
  problem.df(p, now.J);
  const VectorXd gradient = now.J.transpose() * now.f;
  for (Index j = 0; j < p.size(); ++j)
    now.fixed.push_back(problem.at_bound(p, j) && !problem.falls_inwards(p, j, gradient[j]));
  return now;
}

bool stationary(const Standing& now, double exact_cost) {
  const double length = now.f.norm();
  if (length * length <= exact_cost) return true;
  for (Index j = 0; j < now.J.cols(); ++j) {
    const double column = now.J.col(j).norm();
    if (now.fixed[static_cast<std::size_t>(j)] || column == 0.0) continue;
    if (std::abs(now.J.col(j).dot(now.f)) > stationary_cosine * column * length) return false;
  }
  return true;
}

// (J^T J)^-1 of the free parameters, by the singular values of J with its columns scaled to one.
// Directions that J does not see get an infinite variance.
MatrixXd inverse_of_normal(const MatrixXd& J) {
  if (J.cols() == 0) return {};
  VectorXd norms = J.colwise().norm();
  for (double& norm : norms)
    if (norm == 0.0) norm = 1.0;
  const Eigen::JacobiSVD<MatrixXd> svd(J * norms.cwiseInverse().asDiagonal(), Eigen::ComputeThinV);
  VectorXd weight = svd.singularValues();
  const double seen = weight.size() > 0 ? weight[0] * 1e-13 : 0.0;
  for (double& w : weight) w = w > seen ? 1.0 / (w * w) : 1e200;
  const MatrixXd V = norms.cwiseInverse().asDiagonal() * svd.matrixV();
  return V * weight.asDiagonal() * V.transpose();
}

void judge(const Bounded& problem, const Standing& now, LeastSquaresSummary& summary) {
  std::vector<Index> free;
  for (Index j = 0; j < now.J.cols(); ++j)
    if (!now.fixed[static_cast<std::size_t>(j)]) free.push_back(j);
  const auto freedom = static_cast<double>(now.J.rows() - static_cast<Index>(free.size()));
  const MatrixXd covariance = inverse_of_normal(now.J(Eigen::all, free)) *
                              (freedom > 0.0 ? summary.residual_sum_of_squares / freedom : nan);
  summary.covariance = MatrixXd::Constant(now.J.cols(), now.J.cols(), nan);
  summary.covariance(free, free) = covariance;
  for (Index j = 0; j < now.J.cols(); ++j) {
    const bool bound = now.fixed[static_cast<std::size_t>(j)];
    const double most =
        most_relative_error * std::max(std::abs(summary.parameters[j]), problem.scale(j));
    const bool unseen = now.J.col(j).norm() == 0.0;
    const bool open = !bound && (unseen || std::sqrt(summary.covariance(j, j)) > most);
    summary.at_bound.push_back(bound);
    summary.undetermined.push_back(open);
    if (!open) continue;
    summary.covariance.row(j).setConstant(nan);
    summary.covariance.col(j).setConstant(nan);
  }
}

void check_shape(const LeastSquaresProblem& problem) {
  const Index size = problem.start.size();
  if (size == 0 || problem.count < size)
    throw std::invalid_argument(
        fmt::format("{} residuals for {} parameters; must be as many or "
                    "more, for one parameter or more",
                    problem.count, size));
  for (const VectorXd* bound : {&problem.lower, &problem.upper})
    if (bound->size() != 0 && bound->size() != size)
      throw std::invalid_argument("bounds must be none, or one for each parameter");
}

LeastSquaresSummary nowhere(const VectorXd& start) {
  LeastSquaresSummary summary;
  const auto size = static_cast<std::size_t>(start.size());
  summary.parameters = start;
  summary.residual_sum_of_squares = nan;
  summary.covariance = MatrixXd::Constant(start.size(), start.size(), nan);
  summary.at_bound.assign(size, false);
  summary.undetermined.assign(size, true);
  summary.evaluations = 1;
  summary.reason = "the residuals are not finite at the start";
  return summary;
}

}  // namespace

void LeastSquaresOptions::validate() const {
  check("cost_tolerance", cost_tolerance, 0.0, 0.1);
  check("parameter_tolerance", parameter_tolerance, 0.0, 0.1);
  check("exact_cost", exact_cost, 0.0, 1e100);
  check("first_step", first_step, 1e-3, 100.0);
  check("most_evaluations", most_evaluations, 1, 1e9);
  check("most_rounds", most_rounds, 1, 1e6);
}

bool LeastSquaresSummary::usable() const {
  return converged &&
         std::none_of(undetermined.begin(), undetermined.end(), [](bool open) { return open; });
}

double LeastSquaresSummary::standard_error(Eigen::Index which) const {
  return std::sqrt(covariance(which, which));
}

LeastSquaresSummary least_squares(const LeastSquaresProblem& problem,
                                  const LeastSquaresOptions& options) {
  options.validate();
  check_shape(problem);
  Bounded bounded(problem);
  LeastSquaresSummary summary;
  VectorXd p = bounded.inside(problem.start);
  VectorXd f;
  bounded(p, f);
  if (!f.allFinite() || f[0] == beyond_the_model) return nowhere(p);
  const double exact_cost = std::max(options.exact_cost, 1e-24 * f.squaredNorm());

  Descent descent;
  Standing now;
  for (int round = 0; round < options.most_rounds && !summary.converged; ++round) {
    descent = descend(bounded, p, options);
    p = bounded.inside(p);
    now = stand(bounded, p);
    summary.converged = descent.ended && stationary(now, exact_cost);
    if (!descent.ended) break;
  }
  summary.parameters = p;
  summary.residual_sum_of_squares = now.f.squaredNorm();
  summary.reason = summary.converged || !descent.ended
                       ? descent.reason
                       : "the sum of squares still falls, but no step makes it fall";
  judge(bounded, now, summary);
  summary.evaluations = bounded.evaluations();
  if (summary.converged && !summary.usable())
    summary.reason += ", and some parameters do not matter";
  return summary;
}

}  // namespace clickwise::damper
