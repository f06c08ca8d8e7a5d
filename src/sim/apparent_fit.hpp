// Least squares over blocks of a ride, with what the blocks' scatter leaves open. Private to sim.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "apparent_rows.hpp"

namespace clickwise::sim {

// The unknowns of (A3): the spring's share, the offset, friction, then the forces at the knots.
inline constexpr Eigen::Index share_index = 0, offset_index = 1, friction_index = 2,
                              first_knot_index = 3;

struct ApparentFit {
  Eigen::VectorXd theta;
  Eigen::MatrixXd covariance;  // between blocks, (A5)
  double rms_n = 0.0;          // of the residuals
  double load_rms_n = 0.0;     // of y about its mean
  std::size_t rows = 0;
  int blocks = 0;

  double residual_n(const ApparentRow& row) const;
};

// Huber's weights in three passes (Huber, Ann. Math. Stat. 35:73-101, 1964). `share_free` false
// holds the spring's share at 1. Fewer rows than four times the unknowns give no rows.
ApparentFit fit_apparent(const SprungRide& ride, std::span<const double> felt_m_s2,
                         const ApparentSamples& samples, const Knots& knots, bool share_free);

// The p-quantile of Student's t with so many degrees of freedom (>= 3), by its expansion about the
// normal quantile z: Abramowitz and Stegun, 26.7.5; within 0.5 % for p = 0.95, 3 % for 0.995.
double student_quantile(double normal_quantile, double degrees);

}  // namespace clickwise::sim
