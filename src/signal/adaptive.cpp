#include "adaptive.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <vector>

#include "clickwise/core/statistics.hpp"
#include "reflection.hpp"

namespace clickwise::signal {

namespace {

using std::numbers::pi;

constexpr Eigen::Index last = bank_size - 1;  // the slowest member, which is always let through
constexpr std::size_t chunk_samples = 16384;
// Ends: the length of the parabola that continues them, and how much larger the error is there than
// (3.3) says, measured on seconds cut out of invented rides at 200 Hz and 1 kHz.
constexpr double end_fit_s = 0.010;
constexpr double near_end_excess = 4.0;
constexpr double near_end_decay_s = 0.0025;
constexpr double far_end_excess = 0.6;
constexpr double far_end_decay_s = 0.04;

// Central differences sum_j c_j (y(i+j) - y(i-j)) per interval, of order twice their number
// (B. Fornberg, Math. Comp. 51:699-706, 1988, table 1). Slow logs hold motion up to their last
// hertz, where only the longer one is true: 0.99 at a third of the rate, the shorter one 0.85.
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
constexpr std::size_t short_reach = 4;
constexpr std::size_t long_reach = 8;
constexpr double slow_log_hz = 600.0;

// Against the chance that noise alone looks like power: what is taken off, in noise variances.
constexpr float first_toll = 1.5F;
// The second average looks closer, since most of the noise is gone.
constexpr double second_share = 0.25;
// Whether anything moves is judged over a longer time: when, on average over alert_s, no band has
// more power than noise would give it by alert_from deviations of that power, all gains are 0; they
// are fully open alert_width later. Otherwise chance bursts would be the velocity of a bike at
// rest.
constexpr double alert_s = 0.12;
constexpr float alert_from = 7.0F;
constexpr float alert_width = 3.0F;
constexpr float alert_cap = 18.0F;

// An average runs over at least this many periods of its band's upper cut-off.
constexpr double periods = 0.4;

// Averages are cut off after this many decay times.
constexpr double decays = 14.0;

constexpr float tiny = 1e-30F;  // keeps 0/0 of a silent channel at a gain of 0

template <std::size_t pairs>
double difference_gain(double w) {
  constexpr std::array<double, pairs> c = central_difference<pairs>();
  double gain = 0.0;
  for (std::size_t j = 0; j < pairs; ++j) {
    gain += 2.0 * c[j] * std::sin(static_cast<double>(j + 1) * w);
  }
  return gain;
}

BandLanes keep(const Lanes& decay_s, double rate_hz) {
  return (-1.0 / (decay_s * rate_hz)).exp().cast<float>();
}

// One row of values a sample, in one piece of memory, so that a row shifted by one lane is another
// load: far cheaper than a shuffle. Behind the last row stands a 0 for it.
template <typename Row>
class Rows {
public:
  using Value = typename Row::Scalar;

  void resize(std::size_t n) { values_.resize(n * width + 1); }
  Eigen::Map<Row> operator[](std::size_t i) { return Eigen::Map<Row>(&values_[i * width]); }

  // Each lane less the next slower one; the last lane itself.
  auto steps(std::size_t i) const {
    const Value* const row = &values_[i * width];
    return Eigen::Map<const Row>(row) - all_but_last * Eigen::Map<const Row>(row + 1);
  }

private:
  static constexpr auto width = static_cast<std::size_t>(bank_size);
  static inline const Row all_but_last = [] {
    Row row = Row::Constant(Value(1));
    row[last] = Value(0);
    return row;
  }();
  std::vector<Value> values_;
};

}  // namespace

// Sample i of a chunk is reading first + i - margin.
struct AdaptiveSmoother::Chunk {
  std::size_t first = 0;  // reading that the chunk is for, and how many
  std::size_t count = 0;
  std::vector<double> readings;  // with the margins
  Rows<Lanes> travel;            // of the bank's members
  Rows<BandLanes> velocity;      // of the bank's members; its steps are the bands b_k, then v_last
  Rows<BandLanes> power;         // of b_k, on its way through the averages
  std::vector<float> alert;      // 0 at rest ... 1 when something moves
  std::vector<double> passed;    // sums of gains, over the chunks so far, of every 16th reading

  void resize(std::size_t n) {
    readings.resize(n);
    travel.resize(n);
    velocity.resize(n);
    power.resize(n);
    alert.assign(n, 0.0F);
  }
};

AdaptiveSmoother::AdaptiveSmoother(double rate_hz, double noise_m, double memory_s)
    : rate_hz_(rate_hz),
      noise_m_(noise_m),
      reach_(rate_hz < slow_log_hz ? long_reach : short_reach),
      bank_(rate_hz),
      alert_keep_(std::exp(-1.0 / (alert_s * rate_hz))) {
  const Lanes decay_s = (periods / bank_.cutoff_hz()).max(memory_s);
  first_keep_ = keep(decay_s, rate_hz);
  second_keep_ = keep(second_share * decay_s, rate_hz);
  find_variances();
  const double longest_s = std::max(decay_s.maxCoeff(), alert_s);
  margin_ = bank_.settling_samples() + reach_ +
            static_cast<std::size_t>(std::ceil(decays * longest_s * rate_hz));
}

void AdaptiveSmoother::find_variances() {
  constexpr int steps = 2048;
  Lanes band = Lanes::Zero();
  Lanes step = Lanes::Zero();
  for (int i = 0; i < steps; ++i) {
    const double w = pi * (i + 0.5) / steps;
    const double gain =
        reach_ == long_reach ? difference_gain<long_reach>(w) : difference_gain<short_reach>(w);
    const double d = std::pow(gain * rate_hz_, 2.0) / steps;
    double faster = bank_.gain(0, w);
    for (Eigen::Index k = 0; k < last; ++k) {
      const double slower = bank_.gain(k + 1, w);
      band[k] += d * std::pow(faster - slower, 2.0);
      step[k] += d * (faster - slower);
      faster = slower;
    }
    step[last] += d * faster;
    slowest_noise_gain_ += d * faster * faster;
  }
  slowest_noise_gain_ = std::sqrt(slowest_noise_gain_);
  band_variance_ = (band * noise_m_ * noise_m_).cast<float>();
  step_variance_ = (step * noise_m_ * noise_m_).cast<float>();
}

template <std::size_t reach>
void AdaptiveSmoother::run_bank(Chunk& chunk) const {
  constexpr std::array<double, reach> difference = central_difference<reach>();
  const std::size_t n = chunk.readings.size();
  SplineBank::Pass forward(Lanes::Constant(chunk.readings.front()));
  for (std::size_t i = 0; i < n; ++i) {
    chunk.travel[i] = bank_.step(forward, Lanes::Constant(chunk.readings[i]));
  }
  SplineBank::Pass backward(chunk.travel[n - 1]);
  for (std::size_t i = n; i-- > 0;) {
    chunk.travel[i] = bank_.step(backward, chunk.travel[i]);
    const std::size_t centre = i + reach;
    if (centre + reach >= n) continue;
    Lanes velocity = Lanes::Zero();
    for (std::size_t j = 1; j <= reach; ++j) {
      velocity +=
          difference[j - 1] * rate_hz_ * (chunk.travel[centre + j] - chunk.travel[centre - j]);
    }
    chunk.velocity[centre] = velocity.cast<float>();
  }
}

// The forward half of the first average.
void AdaptiveSmoother::average_power(Chunk& chunk) const {
  BandLanes average = BandLanes::Zero();
  for (std::size_t i = reach_; i + reach_ < chunk.readings.size(); ++i) {
    const BandLanes power = chunk.velocity.steps(i).square();
    average = power + first_keep_ * (average - power);
    chunk.power[i] = average;
  }
}

// The backward half of the first average; the power that its gains let through; and the backward
// half of the second average. On the way: how far the bands' power is above that of noise.
void AdaptiveSmoother::find_first_gains(Chunk& chunk) const {
  // An exponential average to both sides sees about 4 decay times, with 2 B T degrees of freedom.
  const Lanes decay_s = -1.0 / (first_keep_.cast<double>().log() * rate_hz_);
  Lanes width_hz = bank_.cutoff_hz();
  width_hz.head<last>() -= bank_.cutoff_hz().tail<last>();
  BandLanes freedom = (4.0 * decay_s * width_hz).sqrt().cast<float>();
  freedom[last] = 0.0F;
  const BandLanes scale = freedom / (band_variance_ + tiny);
  const BandLanes toll = first_toll * band_variance_;
  BandLanes first = BandLanes::Zero();
  BandLanes second = BandLanes::Zero();
  for (std::size_t i = chunk.readings.size() - reach_; i-- > reach_;) {
    first = chunk.power[i] + first_keep_ * (first - chunk.power[i]);
    chunk.alert[i] = std::min((first * scale - freedom).maxCoeff(), alert_cap);
    const BandLanes gain = (1.0F - toll / (first + tiny)).max(0.0F);
    const BandLanes power = (gain * chunk.velocity.steps(i)).square();
    second = power + second_keep_ * (second - power);
    chunk.power[i] = second;
  }
}

void AdaptiveSmoother::find_alert(Chunk& chunk) const {
  double state = 0.0;
  const auto step = [&](float& value) {
    state = value + alert_keep_ * (state - value);
    value = static_cast<float>(state);
  };
  for (float& value : chunk.alert) step(value);
  for (std::size_t i = chunk.alert.size(); i-- > 0;) {
    step(chunk.alert[i]);
    chunk.alert[i] = std::clamp((chunk.alert[i] - alert_from) / alert_width, 0.0F, 1.0F);
  }
}

// The forward half of the second average, the gains, and what they let through.
void AdaptiveSmoother::combine(Chunk& chunk, Smoothed& out) const {
  const BandLanes noise = band_variance_ + tiny;
  BandLanes only_last = BandLanes::Zero();
  only_last[last] = 1.0F;
  BandLanes second = BandLanes::Zero();
  float sigma = 0.0F;
  for (std::size_t i = reach_; i < margin_ + chunk.count; ++i) {
    second = chunk.power[i] + second_keep_ * (second - chunk.power[i]);
    if (i < margin_) continue;
    const BandLanes share = (chunk.alert[i] * second / (second + noise)).max(only_last);
    const BandLanes gain = share.sqrt();
    const std::size_t at = chunk.first + i - margin_;
    out.position_m[at] = (gain.cast<double>() * chunk.travel.steps(i)).sum();
    out.velocity_m_s[at] = static_cast<double>((gain * chunk.velocity.steps(i)).sum());
    // Gains change little from reading to reading, so these are looked at now and then.
    if (at % 4 == 0) sigma = std::sqrt((2.0F * share / (1.0F + gain) * step_variance_).sum());
    if (at % 16 == 0) chunk.passed.push_back(static_cast<double>(gain.sum()));
    out.sigma_m_s[at] = static_cast<double>(sigma);
  }
}

// Between members as many steps up from the slowest one as gains are open.
double AdaptiveSmoother::effective_cutoff_hz(double open_gains) const {
  const Lanes& cutoff_hz = bank_.cutoff_hz();
  const double share = (open_gains - 1.0) / static_cast<double>(last);
  return cutoff_hz[last] * std::pow(cutoff_hz[0] / cutoff_hz[last], share);
}

void AdaptiveSmoother::widen_at_ends(std::vector<double>& sigma_m_s) const {
  const std::size_t n = sigma_m_s.size();
  const auto reach = static_cast<std::size_t>(8.0 * far_end_decay_s * rate_hz_) + 1;
  for (std::size_t i = 0; i < std::min(n, reach); ++i) {
    const double t = static_cast<double>(i) / rate_hz_;
    const double factor = 1.0 + near_end_excess * std::exp(-t / near_end_decay_s) +
                          far_end_excess * std::exp(-t / far_end_decay_s);
    sigma_m_s[i] *= factor;
    sigma_m_s[n - 1 - i] *= factor;
  }
}

Smoothed AdaptiveSmoother::smooth(std::span<const double> readings_m) const {
  const std::size_t n = readings_m.size();
  Smoothed out;
  out.position_m.resize(n);
  out.velocity_m_s.resize(n);
  out.sigma_m_s.resize(n);
  const auto fit = static_cast<std::size_t>(std::max(1.0, std::round(end_fit_s * rate_hz_)));
  const OddReflection continued(readings_m, fit, noise_m_);
  Chunk chunk;
  for (std::size_t first = 0; first < n; first += chunk_samples) {
    chunk.first = first;
    chunk.count = std::min(chunk_samples, n - first);
    const std::size_t padded = chunk.count + 2 * margin_;
    chunk.resize(padded);
    for (std::size_t i = 0; i < padded; ++i) {
      chunk.readings[i] = continued.at(static_cast<std::ptrdiff_t>(first + i) -
                                       static_cast<std::ptrdiff_t>(margin_));
    }
    if (reach_ == long_reach) run_bank<long_reach>(chunk);
    if (reach_ == short_reach) run_bank<short_reach>(chunk);
    average_power(chunk);
    find_first_gains(chunk);
    find_alert(chunk);
    combine(chunk, out);
  }
  widen_at_ends(out.sigma_m_s);
  out.cutoff_hz = effective_cutoff_hz(core::median(chunk.passed));
  return out;
}

}  // namespace clickwise::signal
