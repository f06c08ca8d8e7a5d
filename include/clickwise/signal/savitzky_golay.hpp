// Least-squares polynomial filters over an odd span: value or derivative at any place in the span,
// with gain and noise in closed form (Savitzky and Golay, Anal. Chem. 36:1627-1639, 1964).
#pragma once

#include <complex>
#include <span>
#include <vector>

namespace clickwise::signal {

// The fit of one polynomial to the samples of a span.
struct SavitzkyGolay {
  int span = 5;             // samples, odd, > degree
  int degree = 2;           // of the polynomial, >= 0
  int derivative = 0;       // 0 ... degree
  double interval_s = 1.0;  // between samples, > 0

  // Throws std::invalid_argument ("name = value; must be ...").
  void validate() const;
};

// Coefficients c_j, j = 0 ... span - 1, so that sum_j c_j y_j estimates the derivative at sample
// position `at`, counted from the centre (-(span-1)/2 ... (span-1)/2). By orthogonal polynomials on
// the grid, so that long spans and high degrees stay accurate.
std::vector<double> coefficients(const SavitzkyGolay& filter, double at = 0.0);

// Standard deviation of the estimate for white noise of standard deviation 1: sqrt(sum c_j^2).
double noise_gain(const std::vector<double>& coefficients);

// sum_j c_j exp(i w (j - (span-1)/2)), w = 2 pi frequency_hz interval_s: what the filter makes of
// exp(i w t). Divide by (i 2 pi f)^derivative for the gain relative to the truth.
std::complex<double> frequency_response(const SavitzkyGolay& filter, double frequency_hz);

// The filter at every sample; within half a span of the ends, the polynomial of the first or last
// full span is evaluated. Needs at least one span of finite values, else std::invalid_argument.
// O(n span).
std::vector<double> filtered(const SavitzkyGolay& filter, std::span<const double> values);

}  // namespace clickwise::signal
