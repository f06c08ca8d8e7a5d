#include "clickwise/bands/velocity.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numeric>
#include <stdexcept>

#include "clickwise/core/statistics.hpp"
#include "force_table.hpp"
#include "speed_axis.hpp"

namespace clickwise::bands {

namespace {

using Mask = std::span<const std::uint8_t>;

// The speeds counted in one direction, in no particular order.
struct Speeds {
  std::vector<double> compression;
  std::vector<double> rebound;
};

Speeds counted_speeds(std::span<const double> velocity_m_s, Mask counted) {
  if (velocity_m_s.size() != counted.size())
    throw std::invalid_argument(fmt::format("counted = {} samples; must be as many as velocity, {}",
                                            counted.size(), velocity_m_s.size()));
  Speeds speeds;
  speeds.compression.reserve(velocity_m_s.size());
  speeds.rebound.reserve(velocity_m_s.size());
  for (std::size_t i = 0; i < counted.size(); ++i) {
    const double v = velocity_m_s[i];
    if (counted[i] == 0 || !std::isfinite(v)) continue;
    if (run::is_compression(v))
      speeds.compression.push_back(v);
    else
      speeds.rebound.push_back(-v);
  }
  return speeds;
}

// One direction's histogram, over speed.
struct SpeedHistogram {
  std::vector<double> edges_m_s;
  std::vector<double> seconds, metres, joules;
  std::size_t first_high = 0;
};

// Eqs. B1 to B4. force_n may be null.
SpeedHistogram fill(const std::vector<double>& speeds, const SpeedAxis& axis, double interval_s,
                    const ForceTable* force_n) {
  SpeedHistogram histogram{axis.edges(),
                           std::vector<double>(axis.bins(), 0.0),
                           std::vector<double>(axis.bins(), 0.0),
                           {},
                           axis.first_high()};
  if (force_n != nullptr) histogram.joules.assign(axis.bins(), 0.0);
  for (const double speed : speeds) {
    const std::size_t bin = axis.bin(speed);
    histogram.seconds[bin] += 1.0;
    histogram.metres[bin] += speed;
    if (force_n != nullptr) histogram.joules[bin] += (*force_n)(speed)*speed;
  }
  for (auto* values : {&histogram.seconds, &histogram.metres, &histogram.joules})
    for (double& value : *values) value *= interval_s;
  return histogram;
}

double low(const std::vector<double>& values, std::size_t first_high) {
  return std::accumulate(values.begin(), values.begin() + static_cast<std::ptrdiff_t>(first_high),
                         0.0);
}

double high(const std::vector<double>& values, std::size_t first_high) {
  return std::accumulate(values.begin() + static_cast<std::ptrdiff_t>(first_high), values.end(),
                         0.0);
}

struct Direction {
  SpeedHistogram histogram;
  Band band;
};

// sign: +1 for compression, -1 for rebound.
Direction direction(const std::vector<double>& speeds, double sign, double split_m_s,
                    double interval_s, const ForceCurve& force_n, const VelocityOptions& options) {
  if (!(split_m_s > 0.0) || !std::isfinite(split_m_s))
    throw std::invalid_argument(
        fmt::format("split = {} m/s; must be positive and finite", split_m_s));
  const double fastest = speeds.empty() ? 0.0 : *std::ranges::max_element(speeds);
  const SpeedAxis axis(split_m_s, fastest, options);
  std::optional<ForceTable> table;
  if (force_n) table.emplace(force_n, sign, fastest);
  Direction result{fill(speeds, axis, interval_s, table ? &*table : nullptr), {}};
  const SpeedHistogram& histogram = result.histogram;
  const std::size_t cut = histogram.first_high;
  Band& band = result.band;
  band.split_m_s = split_m_s;
  band.low_s = low(histogram.seconds, cut);
  band.high_s = high(histogram.seconds, cut);
  band.low_m = low(histogram.metres, cut);
  band.high_m = high(histogram.metres, cut);
  if (table) band.low_j = low(histogram.joules, cut);
  if (table) band.high_j = high(histogram.joules, cut);
  if (speeds.empty()) return result;
  band.max_m_s = fastest;
  band.p50_m_s = core::quantile_of(speeds, 0.50);
  band.p95_m_s = core::quantile_of(speeds, 0.95);
  return result;
}

// Lays rebound, mirrored, before compression.
std::vector<double> join(const std::vector<double>& rebound,
                         const std::vector<double>& compression) {
  std::vector<double> joined(rebound.rbegin(), rebound.rend());
  joined.insert(joined.end(), compression.begin(), compression.end());
  return joined;
}

VelocityHistogram join(const SpeedHistogram& rebound, const SpeedHistogram& compression) {
  VelocityHistogram joined;
  for (std::size_t i = rebound.edges_m_s.size() - 1; i > 0; --i)
    joined.edges_m_s.push_back(-rebound.edges_m_s[i]);
  joined.edges_m_s.insert(joined.edges_m_s.end(), compression.edges_m_s.begin(),
                          compression.edges_m_s.end());
  joined.seconds = join(rebound.seconds, compression.seconds);
  joined.metres = join(rebound.metres, compression.metres);
  joined.joules = join(rebound.joules, compression.joules);
  return joined;
}

// Eq. B6.
core::Density density(const std::vector<double>& speeds, double interval_s, double cell_m_s) {
  constexpr double cells_up_to_m_s = 20.0;  // faster samples share one last cell
  const auto last = static_cast<std::size_t>(cells_up_to_m_s / cell_m_s);
  std::vector<double> count(last + 1, 0.0);
  std::vector<double> sum(last + 1, 0.0);
  for (const double speed : speeds) {
    const double place = speed / cell_m_s;
    const std::size_t cell =
        place < static_cast<double>(last) ? static_cast<std::size_t>(place) : last;
    count[cell] += 1.0;
    sum[cell] += speed;
  }
  core::Density result;
  for (std::size_t cell = 0; cell <= last; ++cell) {
    if (count[cell] == 0.0) continue;
    result.at.push_back(sum[cell] / count[cell]);
    result.weight.push_back(count[cell] * interval_s);
  }
  return result;
}

}  // namespace

void VelocityOptions::validate() const {
  const auto within = [](const char* name, double value, double least, double most) {
    if (!(value >= least && value <= most))
      throw std::invalid_argument(
          fmt::format("{} = {}; must be from {} to {}", name, value, least, most));
  };
  within("bin_m_s", bin_m_s, 1e-3, 1.0);
  within("even_up_to_m_s", even_up_to_m_s, bin_m_s, 20.0);
  within("density_cell_m_s", density_cell_m_s, 1e-4, 1.0);
}

VelocityBands velocity_bands(std::span<const double> velocity_m_s,
                             std::span<const std::uint8_t> counted, double interval_s,
                             const Splits& splits, const ForceCurve& force_n,
                             const VelocityOptions& options) {
  options.validate();
  const Speeds speeds = counted_speeds(velocity_m_s, counted);
  VelocityBands bands;
  bands.density = {density(speeds.compression, interval_s, options.density_cell_m_s),
                   density(speeds.rebound, interval_s, options.density_cell_m_s)};
  const Direction compression =
      direction(speeds.compression, +1.0, splits.compression_m_s, interval_s, force_n, options);
  Direction rebound =
      direction(speeds.rebound, -1.0, splits.rebound_m_s, interval_s, force_n, options);
  bands.histogram = join(rebound.histogram, compression.histogram);
  bands.compression = compression.band;
  bands.rebound = rebound.band;
  return bands;
}

VelocityBands velocity_bands(const run::Motion& motion, std::span<const std::uint8_t> counted,
                             const Splits& splits, const ForceCurve& force_n,
                             const VelocityOptions& options) {
  return velocity_bands(motion.velocity_m_s, counted, motion.time.interval_s(), splits, force_n,
                        options);
}

SpeedDensities speed_densities(std::span<const double> velocity_m_s,
                               std::span<const std::uint8_t> counted, double interval_s,
                               double cell_m_s) {
  VelocityOptions options;
  options.density_cell_m_s = cell_m_s;
  options.validate();
  const Speeds speeds = counted_speeds(velocity_m_s, counted);
  return {density(speeds.compression, interval_s, cell_m_s),
          density(speeds.rebound, interval_s, cell_m_s)};
}

}  // namespace clickwise::bands
