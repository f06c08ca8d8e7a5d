// The lag and the drift between the clocks of two units, from their gyros.
#include <fmt/format.h>

#include <Eigen/Dense>
#include <cmath>

#include "clickwise/signal/lag.hpp"
#include "imu_series.hpp"

namespace clickwise::motion {

namespace {

using Eigen::Vector3d;

constexpr double window_s = 12.0;
constexpr double most_lag_s = 0.2;
constexpr double least_correlation = 0.8;
constexpr double tellable_samples = 0.3;  // a smaller lag is not worth a word
constexpr double tellable_ppm = 40.0;
constexpr double clear_sigmas = 5.0;

// The part of the turning that both units share, three channels.
std::array<std::vector<double>, 3> shared_turning(const UnitSeries& unit, const Vector3d& bearing) {
  std::array<std::vector<double>, 3> out;
  for (std::size_t i = 0; i < unit.gyro.size(); ++i) {
    Vector3d value = unit.usable[i] ? unit.gyro[i] : Vector3d::Constant(NAN);
    value -= bearing * bearing.dot(value);
    for (std::size_t c = 0; c < 3; ++c) out[c].push_back(value[static_cast<Eigen::Index>(c)]);
  }
  return out;
}

struct LagLine {
  double lag_samples = 0.0;  // at the middle of the log
  double drift = 0.0;        // samples a sample
  int windows = 0;
};

LagLine fit_lags(const std::array<std::vector<double>, 3>& early,
                 const std::array<std::vector<double>, 3>& late, double rate_hz) {
  const auto window = static_cast<std::size_t>(window_s * rate_hz);
  const auto most = static_cast<std::size_t>(std::ceil(most_lag_s * rate_hz));
  const std::size_t n = early[0].size();
  std::vector<Eigen::Vector2d> rows;
  std::vector<double> lags;
  LagLine line;
  for (std::size_t first = 0; first + window <= n; first += window) {
    std::vector<std::span<const double>> from, to;
    for (std::size_t c = 0; c < 3; ++c) {
      from.emplace_back(std::span(early[c]).subspan(first, window));
      to.emplace_back(std::span(late[c]).subspan(first, window));
    }
    const signal::Lag lag = signal::find_lag(from, to, most);
    if (!(lag.correlation > least_correlation)) continue;
    const Eigen::Vector2d row(
        1.0, static_cast<double>(first + window / 2) - 0.5 * static_cast<double>(n));
    rows.push_back(row);
    lags.push_back(lag.samples);
  }
  line.windows = static_cast<int>(lags.size());
  if (line.windows < 4) return line;
  Eigen::Matrix2d a = Eigen::Matrix2d::Zero();
  Eigen::Vector2d b = Eigen::Vector2d::Zero();
  for (std::size_t k = 0; k < rows.size(); ++k) {
    a += rows[k] * rows[k].transpose();
    b += rows[k] * lags[k];
  }
  const Eigen::Matrix2d inverse = a.inverse();
  const Eigen::Vector2d fit = inverse * b;
  double squares = 0.0;
  for (std::size_t k = 0; k < rows.size(); ++k) squares += std::pow(lags[k] - rows[k].dot(fit), 2);
  const double scatter = squares / static_cast<double>(line.windows - 2);
  const auto clear = [&](Eigen::Index which) {
    return std::abs(fit[which]) > clear_sigmas * std::sqrt(scatter * inverse(which, which)) + 1e-12;
  };
  if (clear(0)) line.lag_samples = fit[0];
  if (clear(1)) line.drift = fit[1];
  return line;
}

template <class Value>
std::vector<Value> shifted(const std::vector<Value>& series, const LagLine& line, Value outside) {
  std::vector<Value> out(series.size(), outside);
  const double middle = 0.5 * static_cast<double>(series.size());
  for (std::size_t i = 0; i < series.size(); ++i) {
    const double at = static_cast<double>(i);
    const double from = at + line.lag_samples + line.drift * (at - middle);
    if (!(from >= 0.0) || from > static_cast<double>(series.size() - 1)) continue;
    const auto j = std::min(static_cast<std::size_t>(from), series.size() - 2);
    const double part = from - static_cast<double>(j);
    if constexpr (std::is_integral_v<Value>)
      out[i] = part < 0.5 ? series[j] : series[j + 1];
    else
      out[i] = series[j] + part * (series[j + 1] - series[j]);
  }
  return out;
}

void shift(UnitSeries& unit, const LagLine& line) {
  const Vector3d unknown = Vector3d::Constant(NAN);
  if (!unit.accel.empty()) unit.accel = shifted(unit.accel, line, unknown);
  unit.gyro = shifted(unit.gyro, line, unknown);
  unit.clipped = shifted(unit.clipped, line, std::int8_t{0});
  unit.usable = shifted(unit.usable, line, std::uint8_t{0});
}

}  // namespace

void align_units(PairSeries& series, const Vector3d& bearing, double rate_hz) {
  if (series.upper.gyro.size() < 2 || series.lower.gyro.empty()) return;
  const LagLine line = fit_lags(shared_turning(series.upper, bearing),
                                shared_turning(series.lower, bearing), rate_hz);
  if (line.windows == 0) return;
  const bool drifts = std::abs(line.drift) * 1e6 > tellable_ppm;
  if (!drifts && std::abs(line.lag_samples) < tellable_samples) return;
  if (drifts)
    series.notes.push_back(fmt::format(
        "the lower unit's clock runs {:.0f} ppm {} the upper one's; taken out by the gyros",
        std::abs(line.drift) * 1e6, line.drift < 0.0 ? "behind" : "ahead of"));
  else
    series.notes.push_back(
        fmt::format("the lower unit is {:.1f} ms {} the upper one; taken out by the gyros",
                    1e3 * std::abs(line.lag_samples) / rate_hz,
                    line.lag_samples > 0.0 ? "behind" : "ahead of"));
  shift(series.lower, drifts ? line : LagLine{line.lag_samples, 0.0, line.windows});
}

}  // namespace clickwise::motion
