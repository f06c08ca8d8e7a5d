// The bank of quintic smoothing splines behind smoother.hpp, equation (3.1), run as recursive
// filters: once forward and once back, all members side by side.
#pragma once

#include <Eigen/Core>
#include <cstddef>

namespace clickwise::signal {

inline constexpr Eigen::Index bank_size = 8;
using Lanes = Eigen::Array<double, bank_size, 1>;

class SplineBank {
public:
  // Cut-offs in geometric steps, the fastest first.
  explicit SplineBank(double rate_hz);

  const Lanes& cutoff_hz() const { return cutoff_hz_; }

  // The members as recursive filters: u += real_gain (y - u), then
  // step = pair_gain (u - w) + pair_keep step and w += step; a forward pass over the readings, then
  // a backward pass over its results, give the outputs. A transient dies out within
  // settling_samples().
  const Lanes& real_gain() const { return real_gain_; }
  const Lanes& pair_gain() const { return pair_gain_; }
  const Lanes& pair_keep() const { return pair_keep_; }
  std::size_t settling_samples() const { return settling_; }

  // Gain of member k at w radians a sample.
  double gain(Eigen::Index k, double w) const;

private:
  double rate_hz_;
  Lanes cutoff_hz_;
  Lanes real_gain_;              // of the real pole
  Lanes pair_gain_, pair_keep_;  // of the conjugate pair
  std::size_t settling_ = 0;
};

}  // namespace clickwise::signal
