#include "adaptive.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <vector>

#include "adaptive_passes.hpp"
#include "central_difference.hpp"
#include "clickwise/core/statistics.hpp"
#include "reflection.hpp"

namespace clickwise::signal {

namespace {

using std::numbers::pi;

constexpr Eigen::Index last = bank_size - 1;  // the slowest member, which is always let through
constexpr std::size_t chunk_samples = 8192;
// Ends: the length of the parabola that continues them, and how much larger the error is there than
// (3.3) says, measured on seconds cut out of invented rides at 200 Hz and 1 kHz.
constexpr double end_fit_s = 0.010;
constexpr double near_end_excess = 4.0;
constexpr double near_end_decay_s = 0.0025;
constexpr double far_end_excess = 0.6;
constexpr double far_end_decay_s = 0.04;

constexpr double slow_log_hz = 600.0;

// Against the chance that noise alone looks like power: what is taken off, in noise variances. A
// slow log has its motion up to the last hertz, where what is taken off costs more motion than it
// saves noise, and with it time at speed; measured from 200 Hz to 1 kHz.
constexpr double fast_log_toll = 1.5;
constexpr double slow_log_toll = 1.05;
constexpr double slow_log_noise = 0.3;  // of the noise that the gains reckon with
constexpr double slow_toll_hz = 250.0;  // slow up to here,
constexpr double fast_toll_hz = 500.0;  // fast from here on
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
constexpr double decays = 10.0;

constexpr float least_variance = 1e-30F;  // keeps 0/0 of a silent channel at a gain of 0

template <std::size_t pairs>
double difference_gain(double w) {
  constexpr std::array<double, pairs> c = central_difference<pairs>();
  double gain = 0.0;
  for (std::size_t j = 0; j < pairs; ++j) {
    gain += 2.0 * c[j] * std::sin(static_cast<double>(j + 1) * w);
  }
  return gain;
}

// 0 for a fast log, 1 for a slow one.
double slowness(double rate_hz) {
  return std::clamp((fast_toll_hz - rate_hz) / (fast_toll_hz - slow_toll_hz), 0.0, 1.0);
}

BandLanes keep(const Lanes& decay_s, double rate_hz) {
  return (-1.0 / (decay_s * rate_hz)).exp().cast<float>();
}

}  // namespace

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
  constexpr int steps = 400;
  Lanes band = Lanes::Zero();
  Lanes step = Lanes::Zero();
  for (int i = 0; i < steps; ++i) {
    const double root = (i + 0.5) / steps;  // dense at low frequencies, where slow members end
    const double w = pi * root * root * root;
    const double width = 3.0 * root * root / steps;  // of the mean over all frequencies
    const double gain =
        reach_ == long_reach ? difference_gain<long_reach>(w) : difference_gain<short_reach>(w);
    const double d = std::pow(gain * rate_hz_, 2.0) * width;
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

BankRows AdaptiveSmoother::bank_rows() const {
  return {row_of(bank_.real_gain()), row_of(bank_.pair_gain()), row_of(bank_.pair_keep())};
}

GainRule AdaptiveSmoother::gain_rule() const {
  // An exponential average to both sides sees about 4 decay times, with 2 B T degrees of freedom.
  const Lanes decay_s = -1.0 / (first_keep_.cast<double>().log() * rate_hz_);
  Lanes width_hz = bank_.cutoff_hz();
  width_hz.head<last>() -= bank_.cutoff_hz().tail<last>();
  BandLanes freedom = (4.0 * decay_s * width_hz).sqrt().cast<float>();
  freedom[last] = 0.0F;
  const BandLanes noise = band_variance_ + least_variance;
  const double slow = slowness(rate_hz_);
  const auto toll = static_cast<float>(std::lerp(fast_log_toll, slow_log_toll, slow));
  const auto noise_share = static_cast<float>(std::lerp(1.0, slow_log_noise, slow));
  GainRule rule{};
  rule.first_keep = row_of(first_keep_);
  rule.second_keep = row_of(second_keep_);
  rule.toll = row_of(toll * band_variance_);
  rule.freedom = row_of(freedom);
  rule.scale = row_of(freedom / noise);
  rule.noise = row_of(noise_share * noise);
  rule.step_variance = row_of(step_variance_);
  rule.alert_keep = static_cast<float>(alert_keep_);
  rule.alert_cap = alert_cap;
  rule.alert_from = alert_from;
  rule.alert_slope = 1.0F / alert_width;
  return rule;
}

// Between members as many steps up from the slowest one as gains are open.
double AdaptiveSmoother::effective_cutoff_hz(double open_gains) const {
  const Lanes& cutoff_hz = bank_.cutoff_hz();
  const double share = (open_gains - 1.0) / static_cast<double>(last);
  return cutoff_hz[last] * std::pow(cutoff_hz[0] / cutoff_hz[last], share);
}

void AdaptiveSmoother::widen_at_ends(std::span<double> sigma_m_s) const {
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

namespace {

// The continued series from reading `begin` on.
void read_chunk(std::span<const double> readings_m, const OddReflection& continued,
                std::ptrdiff_t begin, std::vector<double>& out) {
  const auto end = begin + static_cast<std::ptrdiff_t>(out.size());
  const auto inside_end = std::min(end, static_cast<std::ptrdiff_t>(readings_m.size()));
  auto place = out.begin();
  for (std::ptrdiff_t i = begin; i < 0; ++i) *place++ = continued.at(i);
  place = std::copy(readings_m.begin() + std::max<std::ptrdiff_t>(begin, 0),
                    readings_m.begin() + inside_end, place);
  for (std::ptrdiff_t i = inside_end; i < end; ++i) *place++ = continued.at(i);
}

}  // namespace

double AdaptiveSmoother::smooth(std::span<const double> readings_m,
                                const SmoothedSeries& out) const {
  const std::size_t n = readings_m.size();
  const auto fit = static_cast<std::size_t>(std::max(1.0, std::round(end_fit_s * rate_hz_)));
  const OddReflection continued(readings_m, fit, noise_m_);
  const BankRows bank = bank_rows();
  const GainRule rule = gain_rule();
  PassRows rows;
  std::vector<double> open_gains;
  const auto margin = static_cast<std::ptrdiff_t>(margin_);
  Carried carried(continued.at(-margin));
  std::size_t ahead = margin_;
  for (std::size_t first = 0; first < n; first += chunk_samples) {
    const std::size_t count = std::min(chunk_samples, n - first);
    const std::size_t next = ahead + count - reach_;
    rows.resize(ahead + count + margin_);
    read_chunk(readings_m, continued,
               static_cast<std::ptrdiff_t>(first) - static_cast<std::ptrdiff_t>(ahead),
               rows.readings);
    run_forward(bank, next, carried, rows);
    run_backward(bank, reach_, rate_hz_, rule.first_keep, rows);
    find_gains(rule, reach_, next, carried, rows);
    combine(rule, reach_, rows,
            {ahead, out.position_m.subspan(first, count), out.velocity_m_s.subspan(first, count),
             out.sigma_m_s.subspan(first, count), open_gains});
    ahead = reach_;
  }
  widen_at_ends(out.sigma_m_s);
  return effective_cutoff_hz(core::median(std::move(open_gains)));
}

}  // namespace clickwise::signal
