// Central differences sum_j c_j (y(i+j) - y(i-j)) per interval, of order twice their number
// (B. Fornberg, Math. Comp. 51:699-706, 1988, table 1). Private to signal.
#pragma once

#include <array>
#include <cstddef>

namespace clickwise::signal {

// Slow logs hold motion up to their last hertz, where only the longer one is true: 0.99 at a third
// of the rate, the shorter one 0.85.
inline constexpr std::size_t short_reach = 4;
inline constexpr std::size_t long_reach = 8;

template <std::size_t pairs>
constexpr std::array<double, pairs> central_difference() {
  std::array<double, pairs> c{};
  double product = 2.0;
  for (std::size_t j = 1; j <= pairs; ++j) {
    product *= -static_cast<double>(pairs + 1 - j) / static_cast<double>(pairs + j);
    c[j - 1] = -product / (2.0 * static_cast<double>(j));
  }
  return c;
}

}  // namespace clickwise::signal
