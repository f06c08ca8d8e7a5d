#include "adaptive_passes.hpp"

#include <algorithm>

#include "central_difference.hpp"
#include "clickwise/core/wide.hpp"

namespace clickwise::signal {

namespace {

constexpr float tiny = 1e-30F;  // keeps 0/0 of a silent channel at a gain of 0

[[gnu::always_inline]] inline void step(const BankRows& bank, BankState& state, const Row& value) {
  auto& [u, w1, w2] = state;
  for (std::size_t q = 0; q < quads; ++q) {
    u[q] = bank.real_gain[q] * value[q] + bank.pole[q] * u[q];
    const Quad w = bank.pair_gain[q] * u[q] + bank.second[q] * w2[q] + bank.first[q] * w1[q];
    w2[q] = w1[q];
    w1[q] = w;
  }
}

[[gnu::always_inline]] inline Row all(double value) {
  const Quad quad = Quad{} + value;
  return {{quad, quad, quad}};
}

// Slope at `at`, times the reading interval.
template <std::size_t reach>
[[gnu::always_inline]] inline Row slope(const Row* at) {
  constexpr auto difference = central_difference<reach>();
  Row sum{};
  for (std::size_t j = 1; j <= reach; ++j)
    for (std::size_t q = 0; q < quads; ++q)
      sum[q] += difference[j - 1] * (at[j][q] - (at - j)[0][q]);
  return sum;
}

[[gnu::always_inline]] inline void average(FloatRow& state, const FloatRow& keep, std::size_t q,
                                           FloatQuad value) {
  state[q] = value + keep[q] * (state[q] - value);
}

// Eq. (3.3).
[[gnu::always_inline]] inline double error_of(const GainRule& rule, const FloatRow& share,
                                              const FloatRow& gain) {
  FloatRow variance;
  for (std::size_t q = 0; q < quads; ++q)
    variance[q] = 2.0F * share[q] / (1.0F + gain[q]) * rule.step_variance[q];
  return static_cast<double>(std::sqrt(sum(variance)));
}

template <std::size_t reach>
[[gnu::always_inline]] inline void run_backward_over(const BankRows& bank, double rate_hz,
                                                     const FloatRow& keep, PassRows& rows) {
  const std::size_t n = rows.readings.size();
  const Row start = rows.travel[n - 1];
  BankState state{start, start, start};
  FloatRow power{};
  for (std::size_t i = n; i-- > 0;) {
    step(bank, state, rows.travel[i]);
    rows.travel[i] = state.w1;
    const std::size_t centre = i + reach;
    if (centre + reach >= n) continue;
    const Row velocity = steps(slope<reach>(&rows.travel[centre]));
    for (std::size_t q = 0; q < quads; ++q) {
      const auto band = __builtin_convertvector(rate_hz * velocity[q], FloatQuad);
      rows.bands[centre][q] = band;
      average(power, keep, q, band * band);
    }
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

Carried::Carried(double first_reading)
    : bank{all(first_reading), all(first_reading), all(first_reading)} {}

CLICKWISE_WIDE
void run_forward(const BankRows& bank, std::size_t next, Carried& carried, PassRows& rows) {
  BankState state = carried.bank;
  for (std::size_t i = 0; i < rows.readings.size(); ++i) {
    if (i == next) carried.bank = state;
    step(bank, state, all(rows.readings[i]));
    rows.travel[i] = state.w1;
  }
}

CLICKWISE_WIDE
void run_backward(const BankRows& bank, std::size_t reach, double rate_hz, const FloatRow& keep,
                  PassRows& rows) {
  if (reach == long_reach) run_backward_over<long_reach>(bank, rate_hz, keep, rows);
  if (reach == short_reach) run_backward_over<short_reach>(bank, rate_hz, keep, rows);
}

CLICKWISE_WIDE
void find_gains(const GainRule& rule, std::size_t reach, std::size_t next, Carried& carried,
                PassRows& rows) {
  FloatRow first = carried.first;
  FloatRow second = carried.second;
  double alert = carried.alert;
  for (std::size_t i = reach; i + reach < rows.readings.size(); ++i) {
    if (i == next + reach) {
      carried.first = first;
      carried.second = second;
      carried.alert = alert;
    }
    FloatQuad above = FloatQuad{} - rule.alert_cap;
    for (std::size_t q = 0; q < quads; ++q) {
      average(first, rule.first_keep, q, rows.power[i][q]);
      above = larger(above, first[q] * rule.scale[q] - rule.freedom[q]);
      const FloatQuad gain = larger(1.0F - rule.toll[q] / (first[q] + tiny), FloatQuad{});
      const FloatQuad passed = gain * rows.bands[i][q];
      average(second, rule.second_keep, q, passed * passed);
    }
    rows.power[i] = second;
    const float most = std::max(std::max(above[0], above[1]), std::max(above[2], above[3]));
    const double seen = std::min(most, rule.alert_cap);
    alert = seen + rule.alert_keep * (alert - seen);
    rows.alert[i] = static_cast<float>(alert);
  }
}

CLICKWISE_WIDE
void combine(const GainRule& rule, std::size_t reach, PassRows& rows, const PassOutput& out) {
  constexpr FloatQuad only_last{0.0F, 0.0F, 0.0F, 1.0F};
  const std::size_t count = out.travel_m.size();
  FloatRow second{};
  double alert = 0.0;
  double sigma = 0.0;
  for (std::size_t i = rows.readings.size() - reach; i-- > out.margin;) {
    for (std::size_t q = 0; q < quads; ++q) average(second, rule.second_keep, q, rows.power[i][q]);
    alert = rows.alert[i] + rule.alert_keep * (alert - rows.alert[i]);
    if (i >= out.margin + count) continue;
    const float open =
        std::clamp((static_cast<float>(alert) - rule.alert_from) * rule.alert_slope, 0.0F, 1.0F);
    Row travel = steps(rows.travel[i]);
    FloatRow share, gain, velocity;
    for (std::size_t q = 0; q < quads; ++q) {
      share[q] = open * second[q] / (second[q] + rule.noise[q]);
      if (q + 1 == quads) share[q] = larger(share[q], only_last);
      gain[q] = root(share[q]);
      travel[q] *= __builtin_convertvector(gain[q], Quad);
      velocity[q] = gain[q] * rows.bands[i][q];
    }
    const std::size_t at = i - out.margin;
    // Gains change little from reading to reading, so these are looked at now and then.
    if (at % 4 == 3 || at + 1 == count) sigma = error_of(rule, share, gain);
    if (at % 16 == 0) out.open_gains.push_back(static_cast<double>(sum(gain)));
    out.travel_m[at] = sum(travel);
    out.velocity_m_s[at] = static_cast<double>(sum(velocity));
    out.sigma_m_s[at] = sigma;
  }
}

}  // namespace clickwise::signal
