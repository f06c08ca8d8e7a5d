// Vibration at the hands, weighted as ISO 5349-1:2001 does. docs/method/imu.md, I9.
#pragma once

#include <span>
#include <vector>

namespace clickwise::signal {

// |Wh| at a frequency (Hz, > 0): the analog design of ISO 8041-1:2017 (band limits 10^0.8 and
// 10^3.1 Hz, transition at 100 / (2 pi) Hz with Q = 0.64). Within 4e-4 of ISO 5349-1 table A.2.
double hand_arm_weight(double frequency_hz);

// Frequency-weighted rms acceleration (m/s^2) of one axis over its unbroken stretches (m/s^2): the
// root of the integral of |Wh|^2 times the power spectral density, in windows of about 4 s; 0 for
// shorter stretches. Above half the rate it sees nothing.
double hand_arm_rms_m_s2(const std::vector<std::span<const double>>& stretches, double rate_hz);

// A(8) = a sqrt(T / 8 h), ISO 5349-1 equation (2); several runs add by their squares.
double daily_exposure_m_s2(double weighted_rms_m_s2, double seconds);

}  // namespace clickwise::signal
