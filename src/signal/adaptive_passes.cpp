#include "adaptive_passes.hpp"

#include <algorithm>

#include "central_difference.hpp"
#include "clickwise/core/wide.hpp"

namespace clickwise::signal {

namespace {

constexpr float tiny = 1e-30F;  // keeps 0/0 of a silent channel at a gain of 0

// Written in increments, so that rounding is not blown up where a pole lies near 1.
[[gnu::always_inline]] inline void step(const BankRows& bank, BankState& state, const Row& value) {
  state.u = state.u + bank.real_gain * (value - state.u);
  state.step = bank.pair_gain * (state.u - state.w) + bank.pair_keep * state.step;
  state.w = state.w + state.step;
}

// Slope at `at`, times the reading interval.
template <std::size_t reach>
[[gnu::always_inline]] inline Row slope(const Row* at) {
  constexpr auto difference = central_difference<reach>();
  Row sum{};
  for (std::size_t j = 1; j <= reach; ++j)
    sum = sum + all(static_cast<float>(difference[j - 1])) * (at[j] - *(at - j));
  return sum;
}

[[gnu::always_inline]] inline void average(Row& state, const Row& keep, const Row& value) {
  state = value + keep * (state - value);
}

// Eq. (3.3).
[[gnu::always_inline]] inline double error_of(const GainRule& rule, const Row& share,
                                              const Row& gain) {
  return static_cast<double>(
      std::sqrt(sum(all(2.0F) * share / (all(1.0F) + gain) * rule.step_variance)));
}

template <std::size_t reach>
[[gnu::always_inline]] inline void run_backward_over(const BankRows& bank, double rate_hz,
                                                     const Row& keep, PassRows& rows) {
  const std::size_t n = rows.readings.size();
  const auto rate = all(static_cast<float>(rate_hz));
  const Row start = rows.travel[n - 1];
  BankState state{start, start, {}};
  Row power{};
  for (std::size_t i = n; i-- > 0;) {
    step(bank, state, rows.travel[i]);
    rows.travel[i] = state.w;
    const std::size_t centre = i + reach;
    if (centre + reach >= n) continue;
    const Row band = rate * steps(slope<reach>(&rows.travel[centre]));
    rows.bands[centre] = band;
    average(power, keep, band * band);
    rows.power[centre] = power;
  }
}

}  // namespace

void PassRows::resize(std::size_t n) {
  readings.resize(n);
  travel.resize(n);
  bands.resize(n);
  power.resize(n);
  alert.resize(n);
}

Carried::Carried(double first_reading) {
  bank.u = bank.w = all(static_cast<float>(first_reading));
}

CLICKWISE_WIDE
void run_forward(const BankRows& bank, std::size_t next, Carried& carried, PassRows& rows) {
  BankState state = carried.bank;
  for (std::size_t i = 0; i < rows.readings.size(); ++i) {
    if (i == next) carried.bank = state;
    step(bank, state, all(static_cast<float>(rows.readings[i])));
    rows.travel[i] = state.w;
  }
}

CLICKWISE_WIDE
void run_backward(const BankRows& bank, std::size_t reach, double rate_hz, const Row& keep,
                  PassRows& rows) {
  if (reach == long_reach) run_backward_over<long_reach>(bank, rate_hz, keep, rows);
  if (reach == short_reach) run_backward_over<short_reach>(bank, rate_hz, keep, rows);
}

CLICKWISE_WIDE
void find_gains(const GainRule& rule, std::size_t reach, std::size_t next, Carried& carried,
                PassRows& rows) {
  Row first = carried.first;
  Row second = carried.second;
  float alert = carried.alert;
  for (std::size_t i = reach; i + reach < rows.readings.size(); ++i) {
    if (i == next + reach) {
      carried.first = first;
      carried.second = second;
      carried.alert = alert;
    }
    average(first, rule.first_keep, rows.power[i]);
    const Row gain = larger(all(1.0F) - rule.toll / (first + all(tiny)), Row{});
    const Row passed = gain * rows.bands[i];
    average(second, rule.second_keep, passed * passed);
    rows.power[i] = second;
    const float most = largest(first * rule.scale - rule.freedom);
    const float seen = std::clamp(most, -rule.alert_cap, rule.alert_cap);
    alert = seen + rule.alert_keep * (alert - seen);
    rows.alert[i] = alert;
  }
}

CLICKWISE_WIDE
void combine(const GainRule& rule, std::size_t reach, PassRows& rows, const PassOutput& out) {
  constexpr Row only_last{{0.0F, 0.0F, 0.0F, 0.0F, 0.0F, 0.0F, 0.0F, 1.0F}};
  const std::size_t count = out.travel_m.size();
  Row second{};
  float alert = 0.0F;
  double sigma = 0.0;
  for (std::size_t i = rows.readings.size() - reach; i-- > out.margin;) {
    average(second, rule.second_keep, rows.power[i]);
    alert = rows.alert[i] + rule.alert_keep * (alert - rows.alert[i]);
    if (i >= out.margin + count) continue;
    const float open = std::clamp((alert - rule.alert_from) * rule.alert_slope, 0.0F, 1.0F);
    const Row share = larger(all(open) * second / (second + rule.noise), only_last);
    const Row gain = root(share);
    const std::size_t at = i - out.margin;
    // Gains change little from reading to reading, so these are looked at now and then.
    if (at % 4 == 3 || at + 1 == count) sigma = error_of(rule, share, gain);
    if (at % 16 == 0) out.open_gains.push_back(static_cast<double>(sum(gain)));
    out.travel_m[at] = static_cast<double>(sum(gain * steps(rows.travel[i])));
    out.velocity_m_s[at] = static_cast<double>(sum(gain * rows.bands[i]));
    out.sigma_m_s[at] = sigma;
  }
}

}  // namespace clickwise::signal
