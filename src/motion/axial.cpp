#include "axial.hpp"

#include <Eigen/Dense>
#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>

namespace clickwise::motion {

namespace {

using Eigen::Matrix3d;
using Eigen::Vector3d;

constexpr double least_turning_rad_s = 0.05;  // rms; below it the gyros tell no mounting

Matrix3d cross_matrix(const Vector3d& v) {
  Matrix3d m;
  m << 0.0, -v.z(), v.y(), v.z(), 0.0, -v.x(), -v.y(), v.x(), 0.0;
  return m;
}

// (I1) with an offset for the gyros' biases, taken off with the means. Twice, for larger turns.
Matrix3d turn_between(const UnitSeries& upper, const UnitSeries& lower,
                      const std::vector<std::uint8_t>& usable) {
  Matrix3d turn = Matrix3d::Identity();
  if (upper.gyro.empty()) return turn;
  Vector3d mean_upper = Vector3d::Zero(), mean_lower = Vector3d::Zero();
  double count = 0.0;
  for (std::size_t i = 0; i < usable.size(); ++i)
    if (usable[i]) {
      mean_upper += upper.gyro[i];
      mean_lower += lower.gyro[i];
      count += 1.0;
    }
  if (count < 10.0) return turn;
  mean_upper /= count;
  mean_lower /= count;
  for (int pass = 0; pass < 2; ++pass) {
    Matrix3d a = Matrix3d::Zero();
    Vector3d b = Vector3d::Zero();
    for (std::size_t i = 0; i < usable.size(); ++i) {
      if (!usable[i]) continue;
      const Vector3d w = turn * (lower.gyro[i] - mean_lower);
      const Matrix3d g = -cross_matrix(w);  // p x w = -[w] p
      a += g.transpose() * g;
      b += g.transpose() * (upper.gyro[i] - mean_upper - w);
    }
    if (!(a.trace() / count > least_turning_rad_s * least_turning_rad_s)) return turn;
    const Vector3d p = a.ldlt().solve(b);
    if (!p.allFinite() || p.norm() > 0.5) return turn;
    turn = Eigen::AngleAxisd(p.norm(), p.norm() > 0.0 ? p.normalized() : Vector3d::UnitX())
               .toRotationMatrix() *
           turn;
  }
  return turn;
}

// (I2): of the changes from sample to sample, which hold the wheel's motion and little else.
Vector3d shaft_direction(const std::vector<Vector3d>& difference, const Axial& out,
                         const Vector3d& nominal) {
  Matrix3d scatter = Matrix3d::Zero();
  for (std::size_t i = 1; i < difference.size(); ++i) {
    if (!out.usable[i] || !out.usable[i - 1] || out.clipped[i] || out.clipped[i - 1]) continue;
    const Vector3d change = difference[i] - difference[i - 1];
    scatter += change * change.transpose();
  }
  const Eigen::SelfAdjointEigenSolver<Matrix3d> solver(scatter);
  if (!(solver.eigenvalues()[2] > 4.0 * solver.eigenvalues()[1])) return nominal;
  Vector3d n = solver.eigenvectors().col(2);
  if (n.dot(nominal) < 0.0) n = -n;
  return n.dot(nominal) > 0.8 ? n : nominal;
}

}  // namespace

Axial axial(const PairSeries& series, const bike::ImuPair& pair, double sag_m) {
  const std::size_t samples = series.upper.usable.size();
  Axial out;
  out.lower_range_m_s2 = series.lower.range_m_s2;
  out.usable.resize(samples);
  out.clipped.resize(samples);
  for (std::size_t i = 0; i < samples; ++i) {
    out.usable[i] = series.upper.usable[i] && series.lower.usable[i];
    out.clipped[i] = series.upper.clipped[i] != 0 ? std::int8_t{2} : series.lower.clipped[i];
  }
  const Matrix3d turn = turn_between(series.upper, series.lower, out.usable);
  out.mounting_rad = Eigen::AngleAxisd(turn).angle();
  std::vector<Vector3d> difference(samples);
  for (std::size_t i = 0; i < samples; ++i)
    difference[i] = turn * series.lower.accel[i] - series.upper.accel[i];
  const Vector3d n = shaft_direction(difference, out, Vector3d(pair.axis.data()));
  for (std::size_t i = 0; i < samples; ++i) {
    out.upper_m_s2.push_back(n.dot(series.upper.accel[i]));
    out.lower_m_s2.push_back(out.upper_m_s2.back() + n.dot(difference[i]));
    double rotation = 0.0;
    if (!series.upper.gyro.empty()) {
      const Vector3d& w = series.upper.gyro[i];
      rotation = (pair.spacing_m - sag_m) * (w - n * n.dot(w)).squaredNorm();
    }
    out.rotation_m_s2.push_back(std::isfinite(rotation) ? rotation : 0.0);
  }
  return out;
}

}  // namespace clickwise::motion
