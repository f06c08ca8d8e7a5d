// Kalman filter and Rauch-Tung-Striebel smoother for small states of fixed size.
//
//   x_(k+1) = F x_k + u + w,  w ~ N(0, Q);      z = h . x + r,  r ~ N(0, R)               (K.1)
//   S = h' P h + R,  K = P h / S,  x += K (z - h . x),  P -= K S K'                       (K.2)
//   C = P_k F' P-_(k+1)^-1,  x_k += C (x_(k+1) - x-_(k+1)),
//   P_k += C (P_(k+1) - P-_(k+1)) C'                                                      (K.3)
//
// R. E. Kalman, J. Basic Eng. 82:35-45 (1960); H. E. Rauch, F. Tung, C. T. Striebel, AIAA J.
// 3:1445-1450 (1965). Measurements are scalar and taken one after the other, so that nothing is
// inverted on the way forward.
#pragma once

#include <Eigen/Core>
#include <Eigen/LU>
#include <cmath>
#include <numbers>
#include <vector>

namespace clickwise::signal {

template <int N>
struct Belief {
  Eigen::Matrix<double, N, 1> mean = Eigen::Matrix<double, N, 1>::Zero();
  Eigen::Matrix<double, N, N> covariance = Eigen::Matrix<double, N, N>::Identity();
};

// (K.2). Returns the measurement's log density before it was taken.
template <int N>
double observe(Belief<N>& belief, const Eigen::Matrix<double, N, 1>& h, double z, double variance) {
  const Eigen::Matrix<double, N, 1> spread = belief.covariance * h;
  const double s = h.dot(spread) + variance;
  const double surprise = z - h.dot(belief.mean);
  belief.mean += spread * (surprise / s);
  belief.covariance -= spread * spread.transpose() / s;
  return -0.5 * (std::log(2.0 * std::numbers::pi * s) + surprise * surprise / s);
}

// Takes the steps of a run forward, then smooths them. One F for all steps.
template <int N>
class Smoother {
public:
  using Vector = Eigen::Matrix<double, N, 1>;
  using Matrix = Eigen::Matrix<double, N, N>;

  Smoother(const Matrix& transition, std::size_t steps) : transition_(transition) {
    predicted_.reserve(steps);
    filtered_.reserve(steps);
  }

  // Keeps the belief after the measurements of a step, and the prediction that they met.
  void keep(const Belief<N>& predicted, const Belief<N>& filtered) {
    predicted_.push_back(predicted);
    filtered_.push_back(filtered);
  }

  // (K.1) without u's noise: F x + u, F P F' + Q.
  Belief<N> predict(const Belief<N>& from, const Vector& input, const Matrix& noise) const {
    return {transition_ * from.mean + input,
            transition_ * from.covariance * transition_.transpose() + noise};
  }

  // (K.3), backwards in place: what was kept is used up. O(steps).
  std::vector<Belief<N>> smoothed() && {
    for (std::size_t i = filtered_.size(); i-- > 1;) {
      const Belief<N>& ahead = filtered_[i];
      Belief<N>& here = filtered_[i - 1];
      const Matrix gain =
          here.covariance * transition_.transpose() * predicted_[i].covariance.inverse();
      here.mean += gain * (ahead.mean - predicted_[i].mean);
      here.covariance += gain * (ahead.covariance - predicted_[i].covariance) * gain.transpose();
    }
    return std::move(filtered_);
  }

private:
  Matrix transition_;
  std::vector<Belief<N>> predicted_;
  std::vector<Belief<N>> filtered_;
};

}  // namespace clickwise::signal
