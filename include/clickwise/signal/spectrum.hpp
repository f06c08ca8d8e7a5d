// Power spectral density by averaged, windowed periodograms.
#pragma once

#include <cstddef>
#include <span>
#include <vector>

namespace clickwise::signal {

enum class Window { rectangle, hann, hamming, blackman, blackman_harris, flat_top };

// The window's weights in periodic form (that is, of period n), n >= 1.
std::vector<double> weights(Window window, std::size_t n);

// Equivalent noise bandwidth in bins: n sum w^2 / (sum w)^2 (Harris, Proc. IEEE 66:51-83, 1978).
double noise_bandwidth_bins(const std::vector<double>& weights);

struct WelchOptions {
  std::size_t segment = 1024;  // samples, >= 2
  std::size_t overlap = 512;   // samples, < segment
  Window window = Window::hann;
  bool remove_mean = true;  // of each segment
  // Median over segments, made unbiased for noise, in place of the mean: short events do not raise
  // it (B. Allen et al., Phys. Rev. D 85:122006, 2012, appendix B).
  bool median = false;

  // Throws std::invalid_argument ("name = value; must be ...").
  void validate() const;
};

struct Spectrum {
  double bin_hz = 0.0;
  std::vector<double> density;  // one-sided, unit^2/Hz, bin i at i bin_hz, 0 ... rate/2
  std::size_t averages = 0;     // segments; 0: the series are shorter than one
};

// One-sided density whose sum times bin_hz is the mean square (Welch, IEEE Trans. AU-15:70-73,
// 1967). Several stretches share one average; no segment spans two. Values must be finite.
// O(n log segment).
Spectrum welch(const std::vector<std::span<const double>>& stretches, double rate_hz,
               const WelchOptions& options = {});

}  // namespace clickwise::signal
