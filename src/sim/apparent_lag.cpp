#include "apparent_lag.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::sim {

namespace {

constexpr int rounds = 2;
constexpr double least_lag_samples = 0.5;
constexpr double enough_s = 60.0;  // of usable riding: a lag does not change

// The samples of the ride's first stretch of usable riding.
ApparentSamples beginning(const ApparentSamples& samples, double interval_s) {
  ApparentSamples part = samples;
  double usable_s = 0.0;
  for (std::uint8_t& one : part.usable) {
    usable_s += one * interval_s;
    if (usable_s > enough_s) one = 0;
  }
  return part;
}

// felt later by so many samples, straight between them; NaN where it is not known.
std::vector<double> shifted(std::span<const double> felt, double samples) {
  std::vector<double> result(felt.size(), NAN);
  const double whole = std::floor(samples);
  const double part = samples - whole;
  const auto by = static_cast<std::ptrdiff_t>(whole);
  const auto count = static_cast<std::ptrdiff_t>(felt.size());
  for (std::ptrdiff_t i = 0; i < count; ++i) {
    const std::ptrdiff_t a = i + by, b = a + 1;
    if (a < 0 || b >= count) continue;
    result[static_cast<std::size_t>(i)] =
        felt[static_cast<std::size_t>(a)] +
        part * (felt[static_cast<std::size_t>(b)] - felt[static_cast<std::size_t>(a)]);
  }
  return result;
}

// Mean square of measured less fitted force, with the accelerometer taken `by` samples later.
double misfit(const SprungRide& ride, std::span<const double> felt, const ApparentSamples& samples,
              const Knots& knots, const ApparentFit& fit, double by) {
  const auto late = shifted(felt, by);
  double squares = 0.0, rows = 0.0;
  each_row(ride, late, samples, knots, [&](const ApparentRow& row) {
    squares += std::pow(fit.residual_n(row), 2);
    rows += 1.0;
  });
  return rows > 0.0 ? squares / rows : INFINITY;
}

// The lowest of the whole steps, by the parabola through it and its neighbours.
double best_lag(const std::vector<double>& misfits, int furthest) {
  const auto lowest = std::min_element(misfits.begin(), misfits.end());
  const auto i = static_cast<std::size_t>(lowest - misfits.begin());
  const double at = static_cast<double>(i) - furthest;
  if (i == 0 || i + 1 == misfits.size()) return at;
  const double bend = misfits[i - 1] - 2.0 * misfits[i] + misfits[i + 1];
  return bend > 0.0 ? at + 0.5 * (misfits[i - 1] - misfits[i + 1]) / bend : at;
}

}  // namespace

Realigned realign(const SprungRide& ride, const ApparentSamples& samples, const Knots& knots,
                  const ApparentOptions& options) {
  Realigned result{{ride.felt_m_s2.begin(), ride.felt_m_s2.end()}, 0.0};
  const ApparentSamples part = beginning(samples, ride.interval_s);
  const int furthest = static_cast<int>(std::floor(options.longest_lag_s / ride.interval_s));
  for (int round = 0; round < rounds && furthest > 0; ++round) {
    const auto fit = fit_apparent(ride, result.felt_m_s2, part, knots, true);
    if (fit.rows == 0) return result;
    std::vector<double> misfits;
    for (int k = -furthest; k <= furthest; ++k)
      misfits.push_back(misfit(ride, ride.felt_m_s2, part, knots, fit, k));
    const double lag = best_lag(misfits, furthest);
    const double size = std::abs(lag);
    if (size < least_lag_samples || size >= furthest)
      return {{ride.felt_m_s2.begin(), ride.felt_m_s2.end()}, 0.0};
    result.felt_m_s2 = shifted(ride.felt_m_s2, lag);
    result.lag_s = lag * ride.interval_s;
  }
  return result;
}

}  // namespace clickwise::sim
