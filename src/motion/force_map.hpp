// The force that the upper unit feels, as one function of travel and velocity that the log itself
// teaches. Private to motion.
#pragma once

#include <Eigen/Core>
#include <functional>
#include <span>
#include <vector>

namespace clickwise::motion {

// f(x, v) = S(x) + D(v), m/s^2 (force over sprung mass): S the bike file's spring where it has one,
// else a polynomial x, x^2, x^4; D straight between knots of velocity (I5).
class ForceMap {
public:
  using SpringCurve = std::function<double(double)>;  // travel (m) -> m/s^2; may be empty

  explicit ForceMap(SpringCurve spring);

  // Least squares over the samples with use != 0, each weighted by 1 / (0.02 + 100 velocity
  // variance), three times, outliers let go (a Cauchy weight). Samples are thinned to one in two.
  void fit(std::span<const double> travel_m, std::span<const double> velocity_m_s,
           std::span<const double> velocity_variance, std::span<const double> felt_m_s2,
           std::span<const std::uint8_t> use);

  struct Linear {
    double value = 0.0;        // f there
    double by_travel = 0.0;    // at least 5 (m/s^2)/m
    double by_velocity = 0.0;  // at least 0.3 (m/s^2)/(m/s)
    double variance = 0.0;     // of the residual at that velocity, as independent samples
  };
  // The residual's own memory is counted in the variance.
  Linear at(double travel_m, double velocity_m_s) const;

  double residual_m_s2() const { return residual_; }

private:
  double value(double travel_m, double velocity_m_s) const;
  double spring(double travel_m) const;
  double spring_slope(double travel_m) const;
  void measure(std::span<const double> residual, std::span<const double> velocity_m_s);

  SpringCurve spring_;
  Eigen::VectorXd coefficients_;  // knots, then the polynomial
  Eigen::VectorXd spread_;        // residual at each knot
  double residual_ = 0.0;
  double memory_samples_ = 1.0;
};

}  // namespace clickwise::motion
