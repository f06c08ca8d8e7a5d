#include "swing.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>
#include <optional>

#include "clickwise/bike/spring.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/signal/kalman.hpp"

namespace clickwise::motion {

namespace {

using State = Eigen::Vector2d;
using Belief = signal::Belief<2>;

constexpr int passes = 3;
constexpr double sag_sigma = 0.25;  // of the stroke
constexpr double sag_memory_s = 0.3;
constexpr double end_margin = 0.01;  // of the stroke
constexpr double bias_sigma_rad_s = 0.05;
constexpr double bias_walk = 1e-9;  // (rad/s)^2/s
constexpr double unusable_rad_s = 6.0;
constexpr double gain_share = 0.012;  // mounting, ratio and arm: of the velocity
constexpr int table_points = 400;
constexpr double least_alignment = 0.8;       // cosine between a bearing found and the file's
constexpr double least_turning_rad_s = 0.03;  // rms about every axis

// Angle over shaft travel and back, from the ratio and the swing table.
struct Geometry {
  core::Polyline angle_of_shaft;
  core::Polyline shaft_of_angle;
  core::Polyline shaft_by_angle;  // dx/dq over q
};

Geometry geometry_of(const bike::End& end) {
  const core::Polyline& wheel_m = *end.imu->swing_m;
  const core::Polyline angle_of_wheel(wheel_m.y(), wheel_m.x());
  std::vector<double> shaft, angle, slope;
  for (int k = -table_points / 10; k <= table_points + table_points / 10; ++k) {
    const double x = end.stroke_m * k / table_points;
    shaft.push_back(x);
    angle.push_back(angle_of_wheel(bike::wheel_travel_m(end, x)));
    slope.push_back(wheel_m.slope(angle.back()) / end.ratio(x));
  }
  return {{shaft, angle}, {angle, shaft}, {angle, slope}};
}

std::vector<double> swing_rate(const PairSeries& series, const Bearings& bearings) {
  std::vector<double> rate(series.upper.gyro.size(), 0.0);
  for (std::size_t i = 0; i < rate.size(); ++i)
    if (series.upper.usable[i] && series.lower.usable[i])
      rate[i] = bearings.lower.dot(series.lower.gyro[i]) - bearings.upper.dot(series.upper.gyro[i]);
  return rate;
}

// White noise of the rate: what its third differences hold at the calmest tenth of the ride.
double rate_noise(const std::vector<double>& rate) {
  std::vector<double> blocks;
  for (std::size_t first = 3; first + 50 <= rate.size(); first += 50) {
    double sum = 0.0;
    for (std::size_t i = first; i < first + 50; ++i)
      sum += std::pow(rate[i] - 3.0 * rate[i - 1] + 3.0 * rate[i - 2] - rate[i - 3], 2) / 20.0;
    blocks.push_back(std::sqrt(sum / 50.0));
  }
  if (blocks.empty()) return 1e-3;
  std::sort(blocks.begin(), blocks.end());
  return std::max(1e-4, blocks[blocks.size() / 10]);
}

// Mean of d d' over the usable samples, d about its mean.
template <class Difference>
Eigen::Matrix3d scatter_of(const PairSeries& series, Difference difference) {
  Eigen::Vector3d mean = Eigen::Vector3d::Zero();
  Eigen::Matrix3d square = Eigen::Matrix3d::Zero();
  double count = 0.0;
  for (std::size_t i = 0; i < series.upper.gyro.size(); ++i) {
    if (!series.upper.usable[i] || !series.lower.usable[i]) continue;
    const Eigen::Vector3d d = difference(i);
    mean += d;
    square += d * d.transpose();
    count += 1.0;
  }
  if (!(count > 0.0)) return square;
  mean /= count;
  return square / count - mean * mean.transpose();
}

// Least squares of the lower unit's turning across its bearing on the upper unit's turning: the two
// rows span the plane across the bearing in the upper frame. Nothing without enough turning.
std::optional<Eigen::Vector3d> upper_bearing(const PairSeries& series,
                                             const Eigen::Vector3d& lower) {
  const Eigen::Vector3d first = lower.unitOrthogonal();
  const Eigen::Vector3d second = lower.cross(first);
  const Eigen::Matrix3d turning =
      scatter_of(series, [&](std::size_t i) { return series.upper.gyro[i]; });
  const Eigen::SelfAdjointEigenSolver<Eigen::Matrix3d> solver(turning);
  if (!(solver.eigenvalues()[0] > least_turning_rad_s * least_turning_rad_s)) return std::nullopt;
  const auto row = [&](const Eigen::Vector3d& across) -> Eigen::Vector3d {
    const Eigen::Matrix3d with = scatter_of(series, [&](std::size_t i) {
      return Eigen::Vector3d(series.upper.gyro[i] + across * across.dot(series.lower.gyro[i]));
    });
    const Eigen::Matrix3d without = scatter_of(series, [&](std::size_t i) {
      return Eigen::Vector3d(series.upper.gyro[i] - across * across.dot(series.lower.gyro[i]));
    });
    // (u + a y)(u + a y)' - (u - a y)(u - a y)' = 2 (u a' + a u') y: times a, less its own part.
    const Eigen::Matrix3d cross = 0.5 * (with - without);
    const Eigen::Vector3d product = cross * across - 0.5 * across * across.dot(cross * across);
    return turning.ldlt().solve(product);
  };
  const Eigen::Vector3d bearing = row(first).cross(row(second));
  if (!(bearing.norm() > 0.5)) return std::nullopt;
  return bearing.normalized();
}

class SwingFilter {
public:
  SwingFilter(const PairSeries& series, const Bearings& bearings, const bike::End& end,
              const SlideSettings& settings)
      : settings_(settings),
        geometry_(geometry_of(end)),
        rate_(swing_rate(series, bearings)),
        noise_(rate_noise(rate_)),
        usable_(rate_.size()),
        outside_(rate_.size(), 0) {
    for (std::size_t i = 0; i < usable_.size(); ++i)
      usable_[i] = series.upper.usable[i] && series.lower.usable[i];
  }

  Slid run() {
    for (int pass = 0; pass < passes; ++pass) {
      smooth();
      for (std::size_t i = 0; i < rate_.size(); ++i) {
        const double margin = end_margin * settings_.stroke_m;
        const double x = geometry_.shaft_of_angle(beliefs_[i].mean[0]);
        outside_[i] = x < -margin ? -1 : x > settings_.stroke_m + margin ? 1 : 0;
      }
    }
    return result();
  }

private:
  void observe_all(std::size_t i, Belief& belief) const {
    const State angle = State::UnitX();
    const double full = geometry_.angle_of_shaft(settings_.stroke_m);
    const double independent = 2.0 * sag_memory_s / settings_.interval_s;
    signal::observe(belief, angle, geometry_.angle_of_shaft(settings_.sag_m),
                    std::pow(sag_sigma * full, 2) * independent);
    if (outside_[i] != 0)
      signal::observe(belief, angle, outside_[i] < 0 ? 0.0 : full, std::pow(0.1 * full, 2));
    if (settings_.seen_travel_m.empty() || !std::isfinite(settings_.seen_travel_m[i])) return;
    const double x = settings_.seen_travel_m[i];
    const double slope = geometry_.shaft_by_angle(geometry_.angle_of_shaft(x));
    signal::observe(belief, angle, geometry_.angle_of_shaft(x),
                    settings_.seen_variance_m2 / (slope * slope));
  }

  void smooth() {
    const double dt = settings_.interval_s;
    Eigen::Matrix2d transition;
    transition << 1.0, -dt, 0.0, 1.0;
    signal::Smoother<2> smoother(transition, rate_.size());
    Belief belief;
    belief.mean = State(geometry_.angle_of_shaft(settings_.sag_m), 0.0);
    belief.covariance = State(std::pow(0.3 * geometry_.angle_of_shaft(settings_.stroke_m), 2),
                              bias_sigma_rad_s * bias_sigma_rad_s)
                            .asDiagonal();
    for (std::size_t i = 0; i < rate_.size(); ++i) {
      if (i > 0) {
        const double sigma = usable_[i] ? noise_ : unusable_rad_s;
        Eigen::Matrix2d noise = Eigen::Matrix2d::Zero();
        noise(0, 0) = sigma * sigma * dt * dt;
        noise(1, 1) = bias_walk * dt;
        belief = smoother.predict(belief, State(0.5 * dt * (rate_[i] + rate_[i - 1]), 0.0), noise);
      }
      const Belief predicted = belief;
      observe_all(i, belief);
      smoother.keep(predicted, belief);
    }
    beliefs_ = std::move(smoother).smoothed();
  }

  Slid result() const {
    Slid out;
    for (std::size_t i = 0; i < rate_.size(); ++i) {
      const double angle = beliefs_[i].mean[0];
      const double slope = geometry_.shaft_by_angle(
          std::clamp(angle, 0.0, geometry_.angle_of_shaft(settings_.stroke_m)));
      const double velocity = (rate_[i] - beliefs_[i].mean[1]) * slope;
      const double rate_variance = noise_ * noise_ + std::max(0.0, beliefs_[i].covariance(1, 1));
      out.travel_m.push_back(geometry_.shaft_of_angle(angle));
      out.velocity_m_s.push_back(velocity);
      out.travel_sigma_m.push_back(slope * std::sqrt(std::max(0.0, beliefs_[i].covariance(0, 0))));
      out.velocity_sigma_m_s.push_back(
          std::hypot(slope * std::sqrt(rate_variance), gain_share * velocity));
    }
    return out;
  }

  const SlideSettings& settings_;
  Geometry geometry_;
  std::vector<double> rate_;
  double noise_;
  std::vector<std::uint8_t> usable_;
  std::vector<std::int8_t> outside_;
  std::vector<Belief> beliefs_;
};

}  // namespace

Bearings bearings(const PairSeries& series, const bike::ImuPair& pair) {
  const Eigen::Vector3d nominal(pair.axis.data());
  Bearings out{nominal, nominal};
  const Eigen::Matrix3d differences = scatter_of(series, [&](std::size_t i) {
    return Eigen::Vector3d(series.lower.gyro[i] - series.upper.gyro[i]);
  });
  const Eigen::SelfAdjointEigenSolver<Eigen::Matrix3d> solver(differences);
  const Eigen::Vector3d principal = solver.eigenvectors().col(2);
  if (solver.eigenvalues()[2] < 9.0 * solver.eigenvalues()[1] ||
      std::abs(principal.dot(nominal)) < least_alignment)
    return out;
  out.lower = principal.dot(nominal) < 0.0 ? Eigen::Vector3d(-principal) : principal;
  out.upper = upper_bearing(series, out.lower).value_or(nominal);
  if (out.upper.dot(nominal) < least_alignment) out.upper = nominal;
  return out;
}

Slid swing(const PairSeries& series, const Bearings& bearings, const bike::End& end,
           const SlideSettings& settings) {
  return SwingFilter(series, bearings, end, settings).run();
}

}  // namespace clickwise::motion
