#include "adaptive.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <vector>

#include "reflection.hpp"

namespace clickwise::signal {

namespace {

using std::numbers::pi;

constexpr std::size_t last = bank_size - 1;  // the slowest member, which is always let through
constexpr std::size_t chunk_samples = 16384;
constexpr double end_fit_s = 0.012;

// Central difference of order 8: sum_j c_j (y(i+j) - y(i-j)) per interval (B. Fornberg, Math.
// Comp. 51:699-706, 1988, table 1).
constexpr std::array<double, 4> difference{4.0 / 5.0, -1.0 / 5.0, 4.0 / 105.0, -1.0 / 280.0};
constexpr std::size_t reach = difference.size();

// Against the chance that noise alone looks like power: what is taken off, in noise variances.
constexpr double first_toll = 1.5;
// The second average looks closer, since most of the noise is gone.
constexpr double second_share = 0.25;
// An average runs over at least this many periods of its band's upper cut-off.
constexpr double periods = 0.22;

double difference_gain(double w) {
  double gain = 0.0;
  for (std::size_t j = 0; j < reach; ++j) {
    gain += 2.0 * difference[j] * std::sin(static_cast<double>(j + 1) * w);
  }
  return gain;
}

LaneAverage average(const Lanes& cutoff_hz, double memory_s, double share, double rate_hz) {
  LaneAverage result{};
  for (std::size_t k = 0; k < bank_size; ++k) {
    const double decay_s = share * std::max(memory_s, periods / cutoff_hz[k]);
    result.keep[k] = std::exp(-1.0 / (decay_s * rate_hz));
  }
  return result;
}

}  // namespace

// Sample i of a chunk is reading first + i - margin.
struct AdaptiveSmoother::Chunk {
  std::size_t first = 0;  // reading that the chunk is for, and how many
  std::size_t count = 0;
  std::vector<double> readings;  // with the margins
  std::vector<Lanes> travel;     // members of the bank
  std::vector<Lanes> band;       // b_k; the last lane: v_last
  std::vector<Lanes> gain;       // g_k; the last lane: 1
};

AdaptiveSmoother::AdaptiveSmoother(double rate_hz, double noise_m, double memory_s)
    : rate_hz_(rate_hz),
      bank_(rate_hz),
      first_average_(average(bank_.cutoff_hz(), memory_s, 1.0, rate_hz)),
      second_average_(average(bank_.cutoff_hz(), memory_s, second_share, rate_hz)) {
  constexpr int steps = 4096;
  const double scale = std::pow(noise_m * rate_hz, 2.0) / steps;
  for (int i = 0; i < steps; ++i) {
    const double w = pi * (i + 0.5) / steps;
    const double d = std::pow(difference_gain(w), 2.0) * scale;
    for (std::size_t k = 0; k < bank_size; ++k) {
      const double faster = bank_.gain(k, w);
      const double slower = k == last ? 0.0 : bank_.gain(k + 1, w);
      if (k != last) band_variance_[k] += d * std::pow(faster - slower, 2.0);
      step_variance_[k] += d * (faster - slower);
    }
  }
  const double slowest_s = std::max(memory_s, periods / bank_.cutoff_hz()[last]);
  margin_ = bank_.settling_samples() + reach +
            static_cast<std::size_t>(std::ceil(16.0 * slowest_s * rate_hz));
}

void AdaptiveSmoother::estimate_bands(Chunk& chunk) const {
  const std::size_t n = chunk.readings.size();
  bank_.run(chunk.readings, chunk.travel);
  for (std::size_t i = 0; i < n; ++i) {
    Lanes velocity{};
    for (std::size_t j = 1; j <= reach; ++j) {
      const Lanes& after = chunk.travel[std::min(i + j, n - 1)];
      const Lanes& before = chunk.travel[i >= j ? i - j : 0];
      const double c = difference[j - 1] * rate_hz_;
      for (std::size_t k = 0; k < bank_size; ++k) velocity[k] += c * (after[k] - before[k]);
    }
    Lanes& band = chunk.band[i];
    for (std::size_t k = 0; k < last; ++k) band[k] = velocity[k] - velocity[k + 1];
    band[last] = velocity[last];
  }
}

void AdaptiveSmoother::find_gains(Chunk& chunk) const {
  constexpr double tiny = 1e-300;  // keeps 0/0 of a silent channel at a gain of 0
  const std::size_t n = chunk.readings.size();
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t k = 0; k < bank_size; ++k) {
      chunk.gain[i][k] = chunk.band[i][k] * chunk.band[i][k];
    }
  }
  first_average_.run(chunk.gain);
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t k = 0; k < bank_size; ++k) {
      const double power = chunk.gain[i][k] + tiny;
      const double gain = std::max(0.0, 1.0 - first_toll * band_variance_[k] / power);
      chunk.gain[i][k] = std::pow(gain * chunk.band[i][k], 2.0);
    }
  }
  second_average_.run(chunk.gain);
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t k = 0; k < bank_size; ++k) {
      const double power = chunk.gain[i][k];
      chunk.gain[i][k] = power / (power + band_variance_[k] + tiny);
    }
    chunk.gain[i][last] = 1.0;
  }
}

void AdaptiveSmoother::combine(const Chunk& chunk, Smoothed& out) const {
  for (std::size_t j = 0; j < chunk.count; ++j) {
    const std::size_t i = j + margin_;
    const Lanes& travel = chunk.travel[i];
    const Lanes& gain = chunk.gain[i];
    double position = travel[last];
    double velocity = chunk.band[i][last];
    double variance = step_variance_[last];
    for (std::size_t k = 0; k < last; ++k) {
      position += gain[k] * (travel[k] - travel[k + 1]);
      velocity += gain[k] * chunk.band[i][k];
      variance += gain[k] * step_variance_[k];
    }
    out.position_m[chunk.first + j] = position;
    out.velocity_m_s[chunk.first + j] = velocity;
    out.sigma_m_s[chunk.first + j] = std::sqrt(variance);
  }
}

Smoothed AdaptiveSmoother::smooth(std::span<const double> readings_m) const {
  const std::size_t n = readings_m.size();
  Smoothed out;
  out.position_m.resize(n);
  out.velocity_m_s.resize(n);
  out.sigma_m_s.resize(n);
  const auto fit = static_cast<std::size_t>(std::max(1.0, std::round(end_fit_s * rate_hz_)));
  const OddReflection continued(readings_m, fit);
  Chunk chunk;
  for (std::size_t first = 0; first < n; first += chunk_samples) {
    chunk.first = first;
    chunk.count = std::min(chunk_samples, n - first);
    const std::size_t padded = chunk.count + 2 * margin_;
    chunk.readings.resize(padded);
    chunk.travel.resize(padded);
    chunk.band.resize(padded);
    chunk.gain.resize(padded);
    for (std::size_t i = 0; i < padded; ++i) {
      chunk.readings[i] = continued.at(static_cast<std::ptrdiff_t>(first + i) -
                                       static_cast<std::ptrdiff_t>(margin_));
    }
    estimate_bands(chunk);
    find_gains(chunk);
    combine(chunk, out);
  }
  return out;
}

}  // namespace clickwise::signal
