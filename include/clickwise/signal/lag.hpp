// How much later one channel tells the same story than another: cross-correlation.
#pragma once

#include <span>
#include <vector>

namespace clickwise::signal {

struct Lag {
  double samples = 0.0;      // > 0: `late` is behind `early`; between samples by a parabola
  double correlation = 0.0;  // at that lag, of the whole series, -1 ... 1
  double gain = 0.0;         // `late` over `early` there: sum of products over sum of squares
};

// The lag within +- most_samples with the largest correlation in size. NaN counts as no reading (0
// after the mean is taken off). Several channels (x, y, z) are summed: they have one lag. An even
// pair of series, or one without movement, has correlation 0 and lag 0. O(n log n), by FFT. Throws
// std::invalid_argument for series of different sizes, or none.
Lag find_lag(const std::vector<std::span<const double>>& early,
             const std::vector<std::span<const double>>& late, std::size_t most_samples);

}  // namespace clickwise::signal
