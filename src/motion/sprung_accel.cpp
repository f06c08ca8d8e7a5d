#include "clickwise/motion/sprung_accel.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <stdexcept>
#include <utility>

namespace clickwise::motion {

namespace {

constexpr std::size_t fewest_at_range = 3;
constexpr double unknown = std::numeric_limits<double>::quiet_NaN();

struct Range {
  double low = std::numeric_limits<double>::infinity();
  double high = -std::numeric_limits<double>::infinity();
};

Range range_of(const std::vector<double>& readings) {
  Range range;
  for (const double reading : readings) {
    if (!std::isfinite(reading)) continue;
    range.low = std::min(range.low, reading);
    range.high = std::max(range.high, reading);
  }
  return range;
}

// Runs at one and the same reading, long enough to be the end of the range.
std::vector<run::Stretch> runs_at(const std::vector<double>& readings, double reading) {
  std::vector<run::Stretch> runs;
  for (std::size_t i = 0; i < readings.size(); ++i) {
    if (readings[i] != reading) continue;
    const std::size_t begin = i;
    while (i < readings.size() && readings[i] == reading) ++i;
    if (i - begin >= fewest_at_range) runs.push_back({begin, i});
  }
  return runs;
}

std::size_t mask(std::vector<double>& readings, const run::Stretch& run) {
  const std::size_t begin = run.begin > 0 ? run.begin - 1 : 0;
  const std::size_t end = std::min(run.end + 1, readings.size());
  std::fill(readings.begin() + static_cast<std::ptrdiff_t>(begin),
            readings.begin() + static_cast<std::ptrdiff_t>(end), unknown);
  return end - begin;
}

void mask_faults(run::Channel& channel, double interval_s, run::FaultLedger& faults) {
  const Range range = range_of(channel.readings);
  if (!(range.low <= range.high)) return;
  const auto count = [&](run::FaultKind kind, const std::vector<run::Stretch>& runs) {
    std::size_t samples = 0;
    for (const run::Stretch& run : runs) samples += mask(channel.readings, run);
    if (samples > 0)
      faults.add(kind, channel.name, static_cast<long long>(runs.size()),
                 static_cast<double>(samples) * interval_s);
  };
  if (range.low == range.high) return count(run::FaultKind::stuck, {{0, channel.readings.size()}});
  auto runs = runs_at(channel.readings, range.high);
  const auto low = runs_at(channel.readings, range.low);
  runs.insert(runs.end(), low.begin(), low.end());
  count(run::FaultKind::saturated, runs);
}

}  // namespace

SprungAccelMotion take_sprung_accel(run::Recording& recording, const bike::SprungAccel& accel,
                                    const UniformClock& clock) {
  if (recording.channels.empty()) throw std::out_of_range("take_sprung_accel: no channel");
  SprungAccelMotion motion;
  mask_faults(recording.channels.back(), recording.interval_s, motion.faults);
  motion.felt_m_s2 = on_base(recording, recording.channels.size() - 1, clock);
  for (double& value : motion.felt_m_s2) value *= accel.m_s2_per_unit();
  recording.channels.pop_back();
  return motion;
}

}  // namespace clickwise::motion
