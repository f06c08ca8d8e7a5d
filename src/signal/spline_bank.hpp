// The bank of quintic smoothing splines behind smoother.hpp, equation (3.1), run as recursive
// filters: once forward and once back, all members side by side.
#pragma once

#include <Eigen/Core>
#include <cstddef>

namespace clickwise::signal {

inline constexpr Eigen::Index bank_size = 12;
using Lanes = Eigen::Array<double, bank_size, 1>;

class SplineBank {
public:
  // Cut-offs in geometric steps, the fastest first.
  explicit SplineBank(double rate_hz);

  const Lanes& cutoff_hz() const { return cutoff_hz_; }

  // The members as recursive filters: u_i = real_gain y_i + pole u_(i-1), then
  // w_i = pair_gain u_i + first w_(i-1) + second w_(i-2); a forward pass over the readings, then a
  // backward pass over its results, give the outputs. A transient dies out within
  // settling_samples().
  const Lanes& pole() const { return pole_; }
  const Lanes& real_gain() const { return real_gain_; }
  const Lanes& first() const { return first_; }
  const Lanes& second() const { return second_; }
  const Lanes& pair_gain() const { return pair_gain_; }
  std::size_t settling_samples() const { return settling_; }

  // Gain of member k at w radians a sample.
  double gain(Eigen::Index k, double w) const;

private:
  double rate_hz_;
  Lanes cutoff_hz_;
  Lanes pole_, real_gain_;            // of the real pole
  Lanes first_, second_, pair_gain_;  // of the conjugate pair
  std::size_t settling_ = 0;
};

}  // namespace clickwise::signal
