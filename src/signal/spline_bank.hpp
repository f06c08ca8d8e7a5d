// The bank of quintic smoothing splines behind smoother.hpp, equation (3.1), run as recursive
// filters: once forward and once back, all members side by side.
#pragma once

#include <array>
#include <cstddef>
#include <span>
#include <vector>

namespace clickwise::signal {

inline constexpr std::size_t bank_size = 12;
using Lanes = std::array<double, bank_size>;

// Two-sided exponential averages, one decay time a lane, in place.
struct LaneAverage {
  Lanes keep;  // share of the running average kept from sample to sample, 0 <= keep < 1

  void run(std::span<Lanes> values) const;
};

class SplineBank {
public:
  // Cut-offs in geometric steps, the fastest first.
  explicit SplineBank(double rate_hz);

  const Lanes& cutoff_hz() const { return cutoff_hz_; }

  // The members' outputs for the (padded) input; transients of both ends die out within
  // settling_samples().
  void run(std::span<const double> input, std::span<Lanes> output) const;

  std::size_t settling_samples() const { return settling_; }

  // Gain of member k at w radians a sample.
  double gain(std::size_t k, double w) const;

private:
  void pass(std::span<Lanes> values, bool backward) const;

  Lanes cutoff_hz_{};
  Lanes pole_{}, real_gain_{};  // of the real pole
  Lanes first_{}, second_{},
      pair_gain_{};  // of the pair: w_i = pair_gain u_i + first w_-1 + second w_-2
  std::size_t settling_ = 0;
};

}  // namespace clickwise::signal
