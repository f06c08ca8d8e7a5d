// A ride with known truth, and the recording that a logger makes of it.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <random>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/run/recording.hpp"
#include "support/ride_of_waves.hpp"

namespace test_support {

struct Logger {
  double rate_hz = 1000.0;
  double noise_counts = 0.6;
  double jitter = 0.0;        // of an interval, uniform to both sides
  double stamp_step_s = 0.0;  // stamps are rounded to it
  unsigned seed = 1;
};

// Larch: 170 mm of stroke on a 12-bit converter.
inline clickwise::bike::End larch_front() {
  clickwise::bike::End end;
  end.stroke_m = 0.170;
  end.sensor.travel_m = clickwise::core::Polyline({210.0, 3850.0}, {0.0, 0.170});
  return end;
}

inline constexpr double metres_per_count = 0.170 / 3640.0;

inline double to_counts(double travel_m) {
  return 210.0 + travel_m / metres_per_count;
}

// Trail noise in two bands, body and wheel, and hits of 60 to 200 ms.
inline WaveRide rough_ride(double duration_s, unsigned seed) {
  WaveRide ride;
  ride.mean_m = 0.045;
  ride.waves = noise_band(0.7, 3.0, 0.008, 40, seed);
  const auto wheel = noise_band(8.0, 20.0, 0.0025, 40, seed + 1);
  ride.waves.insert(ride.waves.end(), wheel.begin(), wheel.end());
  std::mt19937 generator(seed + 2);
  std::uniform_real_distribution<double> uniform(0.0, 1.0);
  for (double t = 0.5; t < duration_s - 0.5; t += 0.3 + 0.6 * uniform(generator)) {
    const double length_s = 0.06 + 0.14 * uniform(generator);
    ride.hits.push_back({t, length_s, 0.03 + 0.25 * length_s});
  }
  return ride;
}

inline clickwise::run::Channel channel_of(const std::string& name, const WaveRide& ride,
                                          const std::vector<double>& taken_s, double noise_counts,
                                          unsigned seed) {
  std::mt19937 generator(seed);
  std::normal_distribution<double> normal(0.0, 1.0);
  clickwise::run::Channel channel{name, {}};
  for (const double t : taken_s) {
    const double counts = to_counts(ride.travel_m(t)) + noise_counts * normal(generator);
    channel.readings.push_back(std::clamp(std::round(counts), 0.0, 4095.0));
  }
  return channel;
}

inline std::vector<double> taken_s(double duration_s, const Logger& logger) {
  std::mt19937 generator(logger.seed + 100);
  std::uniform_real_distribution<double> uniform(-logger.jitter, logger.jitter);
  std::vector<double> t;
  const auto n = static_cast<int>(duration_s * logger.rate_hz);
  for (int i = 0; i < n; ++i)
    t.push_back((i + (i == 0 ? 0.0 : uniform(generator))) / logger.rate_hz);
  return t;
}

// One unbroken stretch with the channels fork and shock, the second from another ride.
inline clickwise::run::Recording logged(const WaveRide& front, const WaveRide& rear,
                                        double duration_s, const Logger& logger) {
  clickwise::run::Recording recording;
  recording.name = "larch.csv";
  recording.t_s = taken_s(duration_s, logger);
  recording.channels = {
      channel_of("fork_adc", front, recording.t_s, logger.noise_counts, logger.seed),
      channel_of("shock_adc", rear, recording.t_s, logger.noise_counts, logger.seed + 1)};
  if (logger.stamp_step_s > 0.0)
    for (double& t : recording.t_s) t = std::round(t / logger.stamp_step_s) * logger.stamp_step_s;
  recording.stretches = {{0, recording.t_s.size()}};
  recording.interval_s = 1.0 / logger.rate_hz;
  return recording;
}

// The same recording without the samples [begin, end): a gap in the clock.
inline void cut_gap(clickwise::run::Recording& recording, std::size_t begin, std::size_t end) {
  const auto erase = [&](std::vector<double>& values) {
    values.erase(values.begin() + static_cast<std::ptrdiff_t>(begin),
                 values.begin() + static_cast<std::ptrdiff_t>(end));
  };
  erase(recording.t_s);
  for (auto& channel : recording.channels) erase(channel.readings);
  recording.stretches = {{0, begin}, {begin, recording.t_s.size()}};
}

}  // namespace test_support
