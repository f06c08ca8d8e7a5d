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

  // One sample of a recursive pass: a forward pass over the readings, then a backward pass over its
  // results, give the members' outputs. A transient dies out within settling_samples().
  struct Pass {
    explicit Pass(const Lanes& start) : u(start), w1(start), w2(start) {}
    Lanes u, w1, w2;
  };
  template <typename Value>
  const Lanes& step(Pass& pass, const Value& value) const {
    pass.u = real_gain_ * value + pole_ * pass.u;
    const Lanes w = pair_gain_ * pass.u + first_ * pass.w1 + second_ * pass.w2;
    pass.w2 = pass.w1;
    pass.w1 = w;
    return pass.w1;
  }

  std::size_t settling_samples() const { return settling_; }

  // Gain of member k at w radians a sample.
  double gain(Eigen::Index k, double w) const;

private:
  double rate_hz_;
  Lanes cutoff_hz_;
  Lanes pole_, real_gain_;  // of the real pole
  Lanes first_{}, second_{},
      pair_gain_{};  // of the pair: w_i = pair_gain u_i + first w_-1 + second w_-2
  std::size_t settling_ = 0;
};

}  // namespace clickwise::signal
