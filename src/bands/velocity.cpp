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

// The counted part of a ride's velocity.
class CountedVelocity {
public:
  CountedVelocity(std::span<const double> velocity_m_s, Mask counted)
      : velocity_m_s_(velocity_m_s), counted_(counted) {
    if (velocity_m_s.size() != counted.size())
      throw std::invalid_argument(
          fmt::format("counted = {} samples; must be as many as velocity, {}", counted.size(),
                      velocity_m_s.size()));
  }

  // Every speed in one direction: +1 for compression, -1 for rebound.
  template <typename Use>
  void each(double sign, Use use) const {
    const bool wanted = sign > 0.0;
    for (std::size_t i = 0; i < counted_.size(); ++i) {
      const double v = velocity_m_s_[i];
      if (counted_[i] != 0 && run::is_compression(v) == wanted && std::isfinite(v)) use(sign * v);
    }
  }

private:
  std::span<const double> velocity_m_s_;
  Mask counted_;
};

// Eq. B6, gathered speed by speed.
class DensityCells {
public:
  explicit DensityCells(double cell_m_s)
      : cells_per_m_s_(1.0 / cell_m_s),
        last_(cells_up_to_m_s * cells_per_m_s_),
        count_(static_cast<std::size_t>(last_) + 1, 0.0),
        sum_(count_.size(), 0.0) {}

  void add(double speed_m_s) {
    const auto cell =
        static_cast<std::size_t>(std::min(speed_m_s * cells_per_m_s_, std::floor(last_)));
    count_[cell] += 1.0;
    sum_[cell] += speed_m_s;
  }

  core::Density density(double interval_s) const {
    core::Density result;
    for (std::size_t cell = 0; cell < count_.size(); ++cell) {
      if (count_[cell] == 0.0) continue;
      result.at.push_back(sum_[cell] / count_[cell]);
      result.weight.push_back(count_[cell] * interval_s);
    }
    return result;
  }

private:
  static constexpr double cells_up_to_m_s = 20.0;  // faster samples share one last cell

  double cells_per_m_s_;
  double last_;
  std::vector<double> count_;
  std::vector<double> sum_;
};

// One direction's histogram, over speed.
struct SpeedHistogram {
  std::vector<double> edges_m_s;
  std::vector<double> seconds, metres, joules;
  std::size_t first_high = 0;
};

SpeedHistogram empty_histogram(const SpeedAxis& axis, bool with_joules) {
  const std::vector<double> zeros(axis.bins(), 0.0);
  return {axis.edges(), zeros, zeros, with_joules ? zeros : std::vector<double>{},
          axis.first_high()};
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
  core::Density density;
  Band band;
};

// p50 and p95 of the speeds that `seconds` counts, one a sample still.
void find_quantiles(const CountedVelocity& velocity, double sign, const SpeedAxis& axis,
                    const std::vector<double>& counts, Band& band) {
  core::BinnedQuantile half(counts, 0.50);
  core::BinnedQuantile most(counts, 0.95);
  const auto& edges = axis.edges();
  const auto inside = [&](double speed, const core::BinnedQuantile& quantile) {
    const double below = quantile.first() > 0 ? edges[quantile.first()] : -1.0;
    return speed > below && speed <= edges[quantile.last() + 1];
  };
  velocity.each(sign, [&](double speed) {
    if (inside(speed, half)) half.add(speed);
    if (inside(speed, most)) most.add(speed);
  });
  band.p50_m_s = half.value();
  band.p95_m_s = most.value();
}

// sign: +1 for compression, -1 for rebound. Eqs. B1 to B4.
Direction direction(const CountedVelocity& velocity, double sign, double split_m_s,
                    double interval_s, const ForceCurve& force_n, const VelocityOptions& options) {
  if (!(split_m_s > 0.0) || !std::isfinite(split_m_s))
    throw std::invalid_argument(
        fmt::format("split = {} m/s; must be positive and finite", split_m_s));
  double fastest = 0.0;
  std::size_t samples = 0;
  velocity.each(sign, [&](double speed) {
    fastest = std::max(fastest, speed);
    ++samples;
  });
  const SpeedAxis axis(split_m_s, fastest, options);
  std::optional<ForceTable> table;
  if (force_n) table.emplace(force_n, sign, fastest);
  Direction result{empty_histogram(axis, force_n != nullptr), {}, {}};
  SpeedHistogram& histogram = result.histogram;
  DensityCells cells(options.density_cell_m_s);
  velocity.each(sign, [&](double speed) {
    const std::size_t bin = axis.bin(speed);
    histogram.seconds[bin] += 1.0;
    histogram.metres[bin] += speed;
    if (table) histogram.joules[bin] += (*table)(speed)*speed;
    cells.add(speed);
  });
  result.density = cells.density(interval_s);
  Band& band = result.band;
  if (samples > 0) {
    band.max_m_s = fastest;
    find_quantiles(velocity, sign, axis, histogram.seconds, band);
  }
  for (auto* values : {&histogram.seconds, &histogram.metres, &histogram.joules})
    for (double& value : *values) value *= interval_s;
  const std::size_t cut = histogram.first_high;
  band.split_m_s = split_m_s;
  band.low_s = low(histogram.seconds, cut);
  band.high_s = high(histogram.seconds, cut);
  band.low_m = low(histogram.metres, cut);
  band.high_m = high(histogram.metres, cut);
  if (table) band.low_j = low(histogram.joules, cut);
  if (table) band.high_j = high(histogram.joules, cut);
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

core::Density density(const CountedVelocity& velocity, double sign, double interval_s,
                      double cell_m_s) {
  DensityCells cells(cell_m_s);
  velocity.each(sign, [&](double speed) { cells.add(speed); });
  return cells.density(interval_s);
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
  const CountedVelocity velocity(velocity_m_s, counted);
  const Direction compression =
      direction(velocity, +1.0, splits.compression_m_s, interval_s, force_n, options);
  const Direction rebound =
      direction(velocity, -1.0, splits.rebound_m_s, interval_s, force_n, options);
  VelocityBands bands;
  bands.density = {compression.density, rebound.density};
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
  const CountedVelocity velocity(velocity_m_s, counted);
  return {density(velocity, +1.0, interval_s, cell_m_s),
          density(velocity, -1.0, interval_s, cell_m_s)};
}

}  // namespace clickwise::bands
