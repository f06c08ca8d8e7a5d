#include "imu_series.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/statistics.hpp"

namespace clickwise::motion {

namespace {

using Eigen::Vector3d;

constexpr double hole_steps = 2.6;      // of a channel's own step: longer is a hole
constexpr double frozen_s = 0.1;        // three readings of a unit that do not change so long
constexpr double range_share = 0.9999;  // of the largest reading: at the range
constexpr double touching = 1e-6;       // weight of a reading in a base sample that counts
constexpr int range_repeats = 3;        // so many neighbours there make it a range

struct Placed {
  std::vector<double> place;
  std::vector<double> value;
};

Placed readings_of(const run::Recording& recording, std::size_t channel,
                   const UniformClock& clock) {
  const auto& readings = recording.channels.at(channel).readings;
  Placed placed;
  for (std::size_t i = 0; i < readings.size(); ++i) {
    if (!std::isfinite(readings[i])) continue;
    placed.place.push_back(clock.place[i]);
    placed.value.push_back(readings[i]);
  }
  return placed;
}

double own_step(const Placed& placed) {
  std::vector<double> steps;
  for (std::size_t i = 1; i < placed.place.size(); ++i)
    steps.push_back(placed.place[i] - placed.place[i - 1]);
  return steps.empty() ? 1.0 : std::max(1.0, core::median(std::move(steps)));
}

// Calls see(j, i, part) for each base sample j between the readings i and i + 1 of a channel.
template <class See>
void between_readings(const Placed& placed, std::size_t samples, See see) {
  const double longest = hole_steps * own_step(placed);
  for (std::size_t i = 0; i + 1 < placed.place.size(); ++i) {
    const double from = placed.place[i];
    const double to = placed.place[i + 1];
    if (!(to > from) || to - from > longest) continue;
    for (double at = std::max(0.0, std::ceil(from)); at <= to; at += 1.0) {
      const auto j = static_cast<std::size_t>(at);
      if (j >= samples) break;
      see(j, i, (at - from) / (to - from));
    }
  }
}

std::vector<double> lay(const run::Recording& recording, std::size_t channel,
                        const UniformClock& clock, double si_per_unit) {
  std::vector<double> out(clock.base.samples, std::numeric_limits<double>::quiet_NaN());
  const Placed placed = readings_of(recording, channel, clock);
  between_readings(placed, out.size(), [&](std::size_t j, std::size_t i, double part) {
    out[j] = si_per_unit * (placed.value[i] + part * (placed.value[i + 1] - placed.value[i]));
  });
  return out;
}

std::vector<Vector3d> three(const run::Recording& recording, std::size_t first,
                            const UniformClock& clock, double si_per_unit) {
  std::vector<Vector3d> out(clock.base.samples);
  for (std::size_t c = 0; c < 3; ++c) {
    const auto one = lay(recording, first + c, clock, si_per_unit);
    for (std::size_t i = 0; i < out.size(); ++i) out[i][static_cast<Eigen::Index>(c)] = one[i];
  }
  return out;
}

// The range of a channel: a largest reading that several neighbours share; infinite without.
double found_range(const std::vector<double>& readings) {
  double most = 0.0;
  for (const double value : readings) most = std::max(most, std::abs(value));
  int run = 0;
  int runs = 0;
  for (const double value : readings) {
    run = std::abs(value) >= range_share * most ? run + 1 : 0;
    runs += run == range_repeats ? 1 : 0;
  }
  return most > 0.0 && runs > 0 ? most : std::numeric_limits<double>::infinity();
}

// Counts the stretches of a mask and their time.
void count_stretches(const std::vector<std::uint8_t>& mask, run::FaultKind kind,
                     const std::string& channel, double interval_s, run::FaultLedger& faults) {
  long long stretches = 0;
  long long samples = 0;
  for (std::size_t i = 0; i < mask.size(); ++i) {
    samples += mask[i];
    stretches += mask[i] && (i == 0 || !mask[i - 1]) ? 1 : 0;
  }
  faults.add(kind, channel, stretches, static_cast<double>(samples) * interval_s);
}

// The axial channel tells; on the base, a sample is clipped where a clipped reading touches it.
void find_clipped(UnitSeries& unit, const run::Recording& recording, std::size_t first_channel,
                  const bike::ImuPair& pair, const UniformClock& clock, run::FaultLedger& faults) {
  Eigen::Index main = 0;
  Vector3d(pair.axis.data()).cwiseAbs().maxCoeff(&main);
  const std::size_t channel = first_channel + static_cast<std::size_t>(main);
  const Placed placed = readings_of(recording, channel, clock);
  const double found = found_range(placed.value) * pair.metres_per_second2_per_unit;
  unit.range_m_s2 = std::min(found, pair.range_m_s2.value_or(found));
  if (!std::isfinite(unit.range_m_s2)) return;
  const double limit = range_share * unit.range_m_s2 / pair.metres_per_second2_per_unit;
  const double sign = pair.axis[static_cast<std::size_t>(main)] < 0.0 ? -1.0 : 1.0;
  std::vector<std::uint8_t> mask(unit.clipped.size(), 0);
  between_readings(placed, mask.size(), [&](std::size_t j, std::size_t i, double part) {
    for (const auto& [reading, weight] :
         {std::pair{placed.value[i], 1.0 - part}, std::pair{placed.value[i + 1], part}}) {
      if (!(std::abs(reading) >= limit) || weight < touching) continue;
      mask[j] = 1;
      unit.clipped[j] = sign * reading > 0.0 ? 1 : -1;
    }
  });
  count_stretches(mask, run::FaultKind::saturated, recording.channels[channel].name,
                  clock.base.interval_s(), faults);
}

bool same(const std::vector<Vector3d>& series, std::size_t i) {
  return series.empty() || series[i] == series[i - 1];
}

// A live unit is never still in all its readings: noise moves the last digit.
void mask_dead(UnitSeries& unit, const std::string& channel, double rate_hz,
               run::FaultLedger& faults) {
  const std::size_t n = unit.usable.size();
  std::vector<std::uint8_t> missing(n, 0);
  std::vector<std::uint8_t> frozen(n, 0);
  const auto longest = static_cast<std::size_t>(std::max(8.0, frozen_s * rate_hz));
  std::size_t since = 0;
  for (std::size_t i = 0; i < n; ++i) {
    const bool there = (unit.accel.empty() || unit.accel[i].allFinite()) &&
                       (unit.gyro.empty() || unit.gyro[i].allFinite());
    missing[i] = !there;
    if (i > 0 && !(there && same(unit.accel, i) && same(unit.gyro, i))) since = i;
    if (i + 1 - since == longest)
      std::fill_n(frozen.begin() + static_cast<std::ptrdiff_t>(since), longest, std::uint8_t{1});
    if (i + 1 - since > longest) frozen[i] = 1;
  }
  count_stretches(missing, run::FaultKind::missing, channel, 1.0 / rate_hz, faults);
  count_stretches(frozen, run::FaultKind::stuck, channel, 1.0 / rate_hz, faults);
  for (std::size_t i = 0; i < n; ++i) unit.usable[i] = !missing[i] && !frozen[i];
}

UnitSeries unit_series(const run::Recording& recording, const UnitChannels& channels,
                       const bike::ImuPair& pair, const UniformClock& clock, const char* name,
                       run::FaultLedger& faults) {
  UnitSeries unit;
  unit.name = name;
  unit.usable.assign(clock.base.samples, 1);
  if (channels.accel)
    unit.accel = three(recording, *channels.accel, clock, pair.metres_per_second2_per_unit);
  if (channels.gyro)
    unit.gyro = three(recording, *channels.gyro, clock, pair.radians_per_second_per_unit);
  const std::string channel =
      recording.channels.at(channels.accel ? *channels.accel : *channels.gyro).name;
  mask_dead(unit, channel, clock.base.rate_hz, faults);
  unit.clipped.assign(clock.base.samples, 0);
  if (channels.accel && !pair.swinging())
    find_clipped(unit, recording, *channels.accel, pair, clock, faults);
  return unit;
}

}  // namespace

PairSeries pair_series(const run::Recording& recording, const PairChannels& channels,
                       const bike::ImuPair& pair, const UniformClock& clock) {
  PairSeries series;
  series.upper = unit_series(recording, channels.upper, pair, clock, "upper", series.faults);
  series.lower = unit_series(recording, channels.lower, pair, clock, "lower", series.faults);
  return series;
}

}  // namespace clickwise::motion
