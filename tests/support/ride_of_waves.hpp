// Motions with known travel and velocity, from formulas: sums of sinusoids and half-sine hits.
#pragma once

#include <cmath>
#include <cstdint>
#include <numbers>
#include <random>
#include <vector>

#include "clickwise/run/motion.hpp"

namespace test_support {

inline constexpr double two_pi = 2.0 * std::numbers::pi;

struct Wave {
  double amplitude_m = 0.0;
  double frequency_hz = 0.0;
  double phase_rad = 0.0;
};

// A compression of half a sine and back, [start, start + length].
struct Hit {
  double start_s = 0.0;
  double length_s = 0.0;
  double height_m = 0.0;
};

struct WaveRide {
  double mean_m = 0.0;
  std::vector<Wave> waves;
  std::vector<Hit> hits;  // smooth at both ends: height sin^4 over the length

  double travel_m(double t_s) const;
  double velocity_m_s(double t_s) const;
};

inline double WaveRide::travel_m(double t_s) const {
  double x = mean_m;
  for (const Wave& w : waves)
    x += w.amplitude_m * std::sin(two_pi * w.frequency_hz * t_s + w.phase_rad);
  for (const Hit& h : hits) {
    const double u = (t_s - h.start_s) / h.length_s;
    if (u > 0.0 && u < 1.0) x += h.height_m * std::pow(std::sin(std::numbers::pi * u), 4);
  }
  return x;
}

inline double WaveRide::velocity_m_s(double t_s) const {
  double v = 0.0;
  for (const Wave& w : waves) {
    const double rate = two_pi * w.frequency_hz;
    v += w.amplitude_m * rate * std::cos(rate * t_s + w.phase_rad);
  }
  for (const Hit& h : hits) {
    const double u = std::numbers::pi * (t_s - h.start_s) / h.length_s;
    if (u > 0.0 && u < std::numbers::pi)
      v +=
          4.0 * h.height_m * std::numbers::pi / h.length_s * std::pow(std::sin(u), 3) * std::cos(u);
  }
  return v;
}

// Gaussian in the limit of many waves: equal power a wave, frequencies spread evenly over the band
// (jittered), phases random; rms travel as given.
inline std::vector<Wave> noise_band(double from_hz, double to_hz, double rms_m, int count,
                                    unsigned seed) {
  std::mt19937 generator(seed);
  std::uniform_real_distribution<double> uniform(0.0, 1.0);
  std::vector<Wave> waves;
  const double step_hz = (to_hz - from_hz) / count;
  for (int i = 0; i < count; ++i)
    waves.push_back({rms_m * std::sqrt(2.0 / count), from_hz + step_hz * (i + uniform(generator)),
                     two_pi * uniform(generator)});
  return waves;
}

// All samples valid.
inline clickwise::run::Motion sampled(const WaveRide& ride, double rate_hz, double duration_s) {
  clickwise::run::Motion motion;
  motion.time = {0.0, rate_hz, static_cast<std::size_t>(std::llround(duration_s * rate_hz))};
  motion.valid.assign(motion.time.samples, 1);
  for (std::size_t i = 0; i < motion.time.samples; ++i) {
    motion.travel_m.push_back(ride.travel_m(motion.time.at(i)));
    motion.velocity_m_s.push_back(ride.velocity_m_s(motion.time.at(i)));
  }
  motion.velocity_sigma_m_s.assign(motion.time.samples, 0.0);
  return motion;
}

inline std::vector<std::uint8_t> all_counted(const clickwise::run::Motion& motion) {
  return std::vector<std::uint8_t>(motion.time.samples, 1);
}

}  // namespace test_support
