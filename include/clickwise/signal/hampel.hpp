// Spikes: samples far from the median of their neighbours, by the scale of those neighbours
// (F. R. Hampel, J. Amer. Statist. Assoc. 69:383-393, 1974).
#pragma once

#include <cstddef>
#include <span>
#include <vector>

namespace clickwise::signal {

// 1 / Phi^-1(3/4): makes the median absolute deviation the standard deviation of normal noise.
inline constexpr double mad_to_sigma = 1.482602218505602;

struct HampelOptions {
  std::size_t half_width = 3;  // samples on each side, >= 1; windows are cut short at the ends
  double threshold = 3.0;      // sigmas, >= 0
  // The scale is taken as at least this (units of the values, >= 0): a quantised channel at rest
  // has a median absolute deviation of 0, and the next count is no spike.
  double least_scale = 0.0;

  // Throws std::invalid_argument ("name = value; must be ...").
  void validate() const;
};

// Indices, increasing, of the samples with |y - median| > threshold * max(scale, least_scale),
// the scale being 1.4826 times the median absolute deviation of the window, the sample included.
// A scale of 0 flags whatever differs from the median. Values must be finite. O(n half_width).
std::vector<std::size_t> hampel_spikes(std::span<const double> values,
                                       const HampelOptions& options = {});

// The median of the window around each listed sample: what a spike stands in for.
std::vector<double> window_medians(std::span<const double> values,
                                   const std::vector<std::size_t>& at, std::size_t half_width);

}  // namespace clickwise::signal
