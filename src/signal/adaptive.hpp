// The adaptive smoother of smoother.hpp, equation (3.2).
#pragma once

#include <cstddef>
#include <span>

#include "clickwise/signal/smoother.hpp"
#include "spline_bank.hpp"

namespace clickwise::signal {

class AdaptiveSmoother {
public:
  AdaptiveSmoother(double rate_hz, double noise_m, double memory_s);

  Smoothed smooth(std::span<const double> readings_m) const;

  static constexpr std::size_t shortest = 9;  // samples: the derivative's span

private:
  struct Chunk;

  void estimate_bands(Chunk& chunk) const;
  void find_gains(Chunk& chunk) const;
  void combine(const Chunk& chunk, Smoothed& out) const;

  double rate_hz_;
  SplineBank bank_;
  LaneAverage first_average_;   // of the bands' power
  LaneAverage second_average_;  // of what the first gains let through
  Lanes band_variance_{};       // noise of b_k, (m/s)^2; the last lane: 0
  Lanes step_variance_{};       // Wiener error of b_k at a gain of 1; the last lane: of v_last
  std::size_t margin_;          // samples that a chunk needs beside it
};

}  // namespace clickwise::signal
