#include "clickwise/motion/second_opinion.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "clickwise/signal/lag.hpp"

namespace clickwise::motion {

namespace {

constexpr double most_lag_s = 0.25;
constexpr double block_s = 2.0;
constexpr double moving_m_s = 0.05;  // rms of a block that can be compared
constexpr double like = 0.8;         // correlation of two that measure one thing
constexpr double unlike = 0.5;
constexpr double tellable_gain = 0.10;  // of 1
constexpr double tellable_samples = 0.3;

std::vector<double> valid_velocity(const run::Motion& motion, const run::Motion& other) {
  std::vector<double> out(motion.velocity_m_s.size(), NAN);
  for (std::size_t i = 0; i < out.size(); ++i)
    if (motion.valid[i] && other.valid[i]) out[i] = motion.velocity_m_s[i];
  return out;
}

double rms(std::span<const double> series) {
  double squares = 0.0;
  double count = 0.0;
  for (const double one : series)
    if (std::isfinite(one)) {
      squares += one * one;
      count += 1.0;
    }
  return count > 0.0 ? std::sqrt(squares / count) : 0.0;
}

// Share of the moving blocks in which the two tell different stories, at the lag of the whole.
double disagreeing(const std::vector<double>& first, const std::vector<double>& second,
                   double rate_hz) {
  const auto block = static_cast<std::size_t>(block_s * rate_hz);
  int moving = 0;
  int unalike = 0;
  for (std::size_t at = 0; block > 0 && at + block <= first.size(); at += block) {
    const auto a = std::span(first).subspan(at, block);
    const auto b = std::span(second).subspan(at, block);
    if (std::max(rms(a), rms(b)) < moving_m_s) continue;
    ++moving;
    unalike += signal::find_lag({a}, {b}, 0).correlation < unlike ? 1 : 0;
  }
  return moving > 0 ? static_cast<double>(unalike) / moving : 0.0;
}

template <class Value>
std::vector<Value> earlier(const std::vector<Value>& series, double samples, Value outside) {
  std::vector<Value> out(series.size(), outside);
  for (std::size_t i = 0; i < series.size(); ++i) {
    const double from = static_cast<double>(i) + samples;
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

void tell(const run::Motion& pair, Agreement& found) {
  const double lag_samples = found.pair_lag_s * pair.time.rate_hz;
  if (found.correlation < -like) {
    found.notes.push_back(
        "potentiometer and IMU pair move against each other: turn the signs of the pair's axis, or "
        "the order of the calibration");
    return;
  }
  if (found.correlation < like) {
    found.notes.push_back(fmt::format(
        "potentiometer and IMU pair tell different stories (correlation {:.2f}): one is unplugged, "
        "slipped or named by a wrong column",
        found.correlation));
    return;
  }
  if (std::abs(lag_samples) > tellable_samples)
    found.notes.push_back(fmt::format("the IMU pair is {:.1f} ms {} the potentiometer; taken out",
                                      1e3 * std::abs(found.pair_lag_s),
                                      lag_samples > 0.0 ? "behind" : "ahead of"));
  if (std::abs(found.gain - 1.0) > tellable_gain)
    found.notes.push_back(
        fmt::format("the IMU pair moves {:.2f} times as far as the potentiometer: check the "
                    "calibration, and the "
                    "pair's units, arm and ratio",
                    found.gain));
  if (found.slipped_share > 0.05)
    found.notes.push_back(
        fmt::format("potentiometer and IMU pair disagree for {:.0f} % of the moving time: one of "
                    "them came loose "
                    "or lost its plug there",
                    100.0 * found.slipped_share));
}

}  // namespace

Agreement agreement(const run::Motion& potentiometer, const run::Motion& pair) {
  Agreement found;
  const double rate_hz = pair.time.rate_hz;
  const auto first = valid_velocity(potentiometer, pair);
  const auto second = valid_velocity(pair, potentiometer);
  if (first.size() < 16 || rms(first) < 1e-3 || rms(second) < 1e-3) {
    found.notes.push_back(
        "potentiometer and IMU pair have no moving time in common: one of them gives nothing");
    return found;
  }
  const signal::Lag lag = signal::find_lag(
      {first}, {second}, static_cast<std::size_t>(std::ceil(most_lag_s * rate_hz)));
  found.correlation = lag.correlation;
  found.gain = lag.gain;
  found.pair_lag_s = lag.samples / rate_hz;
  found.slipped_share = disagreeing(first, earlier(second, lag.samples, double{NAN}), rate_hz);
  found.usable = found.correlation > like && std::abs(found.gain - 1.0) <= 2.0 * tellable_gain;
  tell(pair, found);
  return found;
}

run::Motion shifted(const run::Motion& late, double lag_s) {
  const double samples = lag_s * late.time.rate_hz;
  run::Motion out = late;
  out.travel_m = earlier(late.travel_m, samples, double{NAN});
  out.velocity_m_s = earlier(late.velocity_m_s, samples, double{NAN});
  out.velocity_sigma_m_s = earlier(late.velocity_sigma_m_s, samples, double{NAN});
  out.valid = earlier(late.valid, samples, std::uint8_t{0});
  return out;
}

}  // namespace clickwise::motion
