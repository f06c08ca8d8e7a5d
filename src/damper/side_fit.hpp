// The fit of one direction of a dyno table.
#pragma once

#include <vector>

#include "clickwise/damper/dyno_fit.hpp"
#include "side_model.hpp"

namespace clickwise::damper {

// The law of a direction as the search left it.
struct FittedSide {
  SideLayout layout;
  LeastSquaresSummary found;
  std::vector<double> residual_n;  // law less measured, for every point
  std::vector<double> sigma_n;     // by the noise model, for every point
  std::vector<bool> fits;          // false: a misfit
  std::vector<double> scale;       // of residuals by sigma_n, robust; 1 where the noise is as said
};

// Robust from several starts, then plain least squares of the points that fit. Needs more points
// than parameters.
FittedSide fit_side(const std::vector<SidePoint>& points, const DynoFitOptions& options);

// Standard error of the law's force at a point, N.
double force_error_n(const FittedSide& side, const SidePoint& point);

// A sum of parameters and its standard error: 0 from parameters at a bound, NaN where one of them
// is not determined.
struct Estimate {
  double value = 0.0;
  double standard_error = 0.0;
  bool at_bound = false;  // every one of them is
};
Estimate estimate(const LeastSquaresSummary& found, const std::vector<Eigen::Index>& which);

}  // namespace clickwise::damper
