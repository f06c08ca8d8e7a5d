// Bounded nonlinear least squares with the uncertainty of what it finds.
#pragma once

#include <Eigen/Core>
#include <functional>
#include <string>
#include <vector>

namespace clickwise::damper {

// f(p) with a fixed number of entries. It may give NaN or infinity where the model does not hold:
// such parameters are stepped back from.
using Residuals = std::function<void(const Eigen::VectorXd& p, Eigen::VectorXd& f)>;

// Least |f(p)|^2 over lower <= p <= upper. Bounds are empty (none) or as long as `start`; single
// ones may be infinite. A start outside is moved to the bound.
struct LeastSquaresProblem {
  Residuals residuals;
  Eigen::Index count = 0;  // entries of f; at least as many as parameters
  Eigen::VectorXd start;
  Eigen::VectorXd lower = {};
  Eigen::VectorXd upper = {};
};

struct LeastSquaresOptions {
  double cost_tolerance = 1e-14;       // relative, of |f|^2; 0 to 0.1
  double parameter_tolerance = 1e-14;  // relative, of p; 0 to 0.1
  double exact_cost = 0.0;             // |f|^2 below this is rounding: nothing left to find; >= 0
  double first_step = 1.0;             // of the scaled length of the start; 1e-3 to 100
  int most_evaluations = 4000;         // of f in one descent, Jacobians apart; >= 1
  int most_rounds = 12;                // descents, each from where the one before ended; >= 1

  // Throws std::invalid_argument "name = value; must be ...".
  void validate() const;
};

struct LeastSquaresSummary {
  Eigen::VectorXd parameters;
  double residual_sum_of_squares = 0.0;
  // s^2 (J^T J)^-1 with s^2 = RSS / (count - free parameters); NaN in the rows and columns of
  // parameters at a bound or not determined, and everywhere without a degree of freedom.
  Eigen::MatrixXd covariance;
  std::vector<bool> at_bound;      // the least value would lie beyond the bound, or on it
  std::vector<bool> undetermined;  // its change hardly moves f: any value would do
  int evaluations = 0;
  bool converged = false;
  std::string reason;  // why it stopped, a sentence without its full stop

  // A least value was reached and every parameter not at a bound is determined there. Where this is
  // false, the parameters are no answer.
  bool usable() const;
  double standard_error(Eigen::Index which) const;  // NaN where the covariance is
};

// Levenberg and Marquardt's method in Moré's form (the MINPACK algorithm, by Eigen), with central
// differences that keep within the bounds. Bounds are kept by an active set: a descent sees
// parameters beyond a bound as at it; afterwards each one at a bound stays if the cost rises
// inwards, and is let go in the next descent if it falls. The least value found is the one that the
// start leads to; several starts are the caller's.
//
// A parameter counts as undetermined when its standard error exceeds 1000 times the larger of its
// value and its start, or f does not change with it at all. Accuracy: the NIST StRD sets of
// tests/damper/least_squares_test.cpp, parameters within 1e-6, RSS within 1e-9.
LeastSquaresSummary least_squares(const LeastSquaresProblem& problem,
                                  const LeastSquaresOptions& options = {});

}  // namespace clickwise::damper
