// Invented rides with an accelerometer on the sprung side, and a damper that may change as it goes.
#pragma once

#include <functional>

#include "clickwise/core/units.hpp"
#include "clickwise/sim/apparent.hpp"
#include "replay_rides.hpp"

namespace clickwise::apparent_rides {

inline constexpr double gravity = core::standard_gravity_m_s2;

// What the accelerometer adds to what it feels.
struct Accelerometer {
  double noise_m_s2 = 0.5;
  double bias_m_s2 = 0.0;
  double gain = 1.0;
  int late_samples = 0;
};

// The law with every force `scale` times as large.
inline damper::Law scaled(damper::Law law, double scale) {
  law.bleed_m_s /= std::sqrt(scale);
  law.opening_n *= scale;
  law.slope_n_s_m *= scale;
  law.port_n_s2_m2 *= scale;
  return law;
}

inline damper::Curve scaled(damper::Curve curve, double scale) {
  curve.compression = scaled(curve.compression, scale);
  curve.rebound = scaled(curve.rebound, scale);
  return curve;
}

// The ride at 1 kHz with the damper's forces times scale(part of the ride that has passed).
inline sim::EndTruth ride(const replay_rides::Ride& course,
                          const std::function<double(double)>& scale) {
  constexpr int steps = 10;
  constexpr double step_s = 1e-3 / steps;
  sim::VehicleEnd end = course.parts.vehicle();
  const damper::Curve fresh = end.curve;
  const auto& distance = course.progress.distance_m;
  sim::EndState state = sim::at_rest(end, course.path.height_m(distance[0]));
  sim::EndTruth truth;
  for (std::size_t i = 0; i + 1 < distance.size(); ++i) {
    end.curve = scaled(fresh, scale(static_cast<double>(i) / static_cast<double>(distance.size())));
    sim::EndOutput output;
    const double advance = distance[i + 1] - distance[i];
    for (int k = 1; k <= steps; ++k)
      output = sim::step(end, state,
                         course.path.at(distance[i] + advance * k / steps, 1e3 * advance), step_s);
    truth.travel_m.push_back(output.travel_m);
    truth.velocity_m_s.push_back(output.velocity_m_s);
    truth.felt_m_s2.push_back(output.felt_m_s2);
  }
  return truth;
}

// What review would hand over: a noisy 12-bit log of the travel, smoothed, and the accelerometer.
struct Logged {
  replay_rides::Log log;
  std::vector<double> felt_m_s2;
  std::vector<std::uint8_t> counted;

  sim::SprungRide view() const {
    return {.interval_s = 1e-3,
            .travel_m = log.travel_m,
            .velocity_m_s = log.velocity_m_s,
            .felt_m_s2 = felt_m_s2,
            .counted = counted,
            .velocity_noise_m_s = log.velocity_noise_m_s,
            .cutoff_hz = 100.0};
  }
};

inline Logged logged(const sim::EndTruth& truth, double stroke_m, std::uint64_t seed,
                     const Accelerometer& accelerometer = {}) {
  Logged ride{replay_rides::log_of(truth, stroke_m, seed), {}, {}};
  sim::Random random(seed, 6);
  const auto count = static_cast<int>(truth.felt_m_s2.size());
  for (int i = 0; i < count; ++i) {
    const auto from = static_cast<std::size_t>(std::max(0, i - accelerometer.late_samples));
    ride.felt_m_s2.push_back(accelerometer.gain * truth.felt_m_s2[from] + accelerometer.bias_m_s2 +
                             accelerometer.noise_m_s2 * random.normal());
  }
  ride.counted.assign(truth.travel_m.size(), 1);
  return ride;
}

// The bike file's view of the end, right unless changed.
inline sim::ApparentEnd known(const replay_rides::Parts& parts, bool with_curve = true) {
  sim::ApparentEnd end{parts.sprung_kg, parts.end.stroke_m, parts.end.friction_n,
                       parts.end.ratio, *parts.end.spring,  std::nullopt};
  if (with_curve) end.curve = damper::Damper(parts.damper).curve();
  return end;
}

}  // namespace clickwise::apparent_rides
