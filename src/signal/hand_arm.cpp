#include "clickwise/signal/hand_arm.hpp"

#include <algorithm>
#include <cmath>
#include <complex>
#include <numbers>

#include "clickwise/signal/spectrum.hpp"

namespace clickwise::signal {

namespace {

constexpr double window_s = 4.0;
constexpr double eight_hours_s = 8.0 * 3600.0;
constexpr double highest_turn_hz = 100.0 / (2.0 * std::numbers::pi);
constexpr double transition_q = 0.64;

}  // namespace

double hand_arm_weight(double frequency_hz) {
  const double low_hz = std::pow(10.0, 0.8);
  const double high_hz = std::pow(10.0, 3.1);
  const auto band = [&](double ratio) { return 1.0 / std::sqrt(1.0 + std::pow(ratio, 4)); };
  const std::complex<double> s(0.0, frequency_hz / highest_turn_hz);
  const std::complex<double> transition = (1.0 + s) / (1.0 + s / transition_q + s * s);
  return band(low_hz / frequency_hz) * band(frequency_hz / high_hz) * std::abs(transition);
}

double hand_arm_rms_m_s2(const std::vector<std::span<const double>>& stretches, double rate_hz) {
  WelchOptions options;
  options.segment = std::max<std::size_t>(16, static_cast<std::size_t>(window_s * rate_hz));
  options.overlap = options.segment / 2;
  const Spectrum spectrum = welch(stretches, rate_hz, options);
  double square = 0.0;
  for (std::size_t bin = 1; bin < spectrum.density.size(); ++bin) {
    const double weight = hand_arm_weight(static_cast<double>(bin) * spectrum.bin_hz);
    square += weight * weight * spectrum.density[bin] * spectrum.bin_hz;
  }
  return std::sqrt(square);
}

double daily_exposure_m_s2(double weighted_rms_m_s2, double seconds) {
  return weighted_rms_m_s2 * std::sqrt(seconds / eight_hours_s);
}

}  // namespace clickwise::signal
