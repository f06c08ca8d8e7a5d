#include <cmath>
#include <limits>

#include "clickwise/logs/clock.hpp"

namespace clickwise::logs {

std::vector<double> kept_readings(std::vector<double> readings,
                                  const std::vector<Dropped>& dropped) {
  if (dropped.empty()) return readings;
  std::size_t kept = 0;
  auto next = dropped.begin();
  double sum = 0.0;
  std::size_t count = 0;
  const auto take = [&](double value) {
    if (std::isnan(value)) return;
    sum += value;
    ++count;
  };
  for (std::size_t i = 0; i < readings.size(); ++i) {
    const bool out = next != dropped.end() && next->sample == i;
    const bool merged = out && next->merged && kept > 0;
    if (out) ++next;
    if (out && !merged) continue;
    if (!merged) {
      sum = 0.0;
      count = 0;
    }
    take(readings[i]);
    const double mean =
        count > 0 ? sum / static_cast<double>(count) : std::numeric_limits<double>::quiet_NaN();
    readings[merged ? kept - 1 : kept++] = mean;
  }
  readings.resize(kept);
  return readings;
}

}  // namespace clickwise::logs
