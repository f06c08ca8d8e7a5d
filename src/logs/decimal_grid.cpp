#include "decimal_grid.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdint>
#include <numeric>

namespace clickwise::logs {

namespace {

constexpr std::array<double, 10> scales{1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9};
constexpr double largest_exact = 9007199254740992.0;  // 2^53

// Whether value x scale is whole, to within the rounding of the value and of the product.
bool is_whole(double scaled) {
  const double rounding = std::max(1e-9, 3e-16 * std::abs(scaled));
  return std::abs(scaled) < largest_exact && rounding < 0.01 &&
         std::abs(scaled - std::nearbyint(scaled)) <= rounding;
}

}  // namespace

double decimal_grid(const std::vector<double>& values) {
  std::size_t places = 0;
  for (const double value : values)
    while (!is_whole(value * scales[places]))
      if (++places == scales.size()) return 0.0;
  if (values.empty()) return 0.0;
  const auto whole = [&](double value) {
    return static_cast<std::int64_t>(std::nearbyint(value * scales[places]));
  };
  std::int64_t divisor = 0;
  const std::int64_t first = whole(values.front());
  for (const double value : values) {
    if (!is_whole(value * scales[places])) return 0.0;
    divisor = std::gcd(divisor, whole(value) - first);
  }
  return static_cast<double>(divisor) / scales[places];
}

}  // namespace clickwise::logs
