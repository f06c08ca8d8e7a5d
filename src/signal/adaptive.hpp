// The adaptive smoother of smoother.hpp, equation (3.2).
#pragma once

#include <cstddef>
#include <span>
#include <vector>

#include "adaptive_passes.hpp"
#include "clickwise/signal/smoother.hpp"
#include "spline_bank.hpp"

namespace clickwise::signal {

// Bands need less precision than the readings: their errors do not build up.
using BandLanes = Eigen::Array<float, bank_size, 1>;

class AdaptiveSmoother {
public:
  AdaptiveSmoother(double rate_hz, double noise_m, double memory_s);

  // Returns the cut-off, see smoother.hpp.
  double smooth(std::span<const double> readings_m, const SmoothedSeries& out) const;

  // Standard deviation of the velocity where no band is let through, for readings of this noise.
  double rest_velocity_noise(double noise_m) const { return noise_m * slowest_noise_gain_; }

  static constexpr std::size_t shortest = 9;  // samples: the derivative's span

private:
  void find_variances();
  BankRows bank_rows() const;
  GainRule gain_rule() const;
  void widen_at_ends(std::span<double> sigma_m_s) const;
  double effective_cutoff_hz(double open_gains) const;

  double rate_hz_;
  double noise_m_;
  std::size_t reach_;  // of the derivative to either side, samples
  SplineBank bank_;
  double alert_keep_;        // share of a running average kept from sample to sample: of the alert,
  BandLanes first_keep_;     // of the bands' power,
  BandLanes second_keep_;    // and of what the first gains let through
  BandLanes band_variance_;  // noise of b_k, (m/s)^2; the last lane: 0
  BandLanes step_variance_;  // Wiener error of b_k at a gain of 1; the last lane: of v_last
  double slowest_noise_gain_ = 0.0;  // standard deviation of v_last for readings of noise 1
  std::size_t margin_;               // samples that a chunk needs beside it
};

}  // namespace clickwise::signal
