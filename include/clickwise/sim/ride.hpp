// The invented ride itself: what really happened, known to the last sample.
#pragma once

#include <cstdint>
#include <optional>
#include <vector>

#include "clickwise/bike/adjuster.hpp"
#include "clickwise/run/event.hpp"
#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/speed_plan.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

struct Scene;

// One end, a value per sample of the ride. Travel may leave [0, stroke] by the metal's give.
struct EndTruth {
  std::vector<double> travel_m;
  std::vector<double> velocity_m_s;
  std::vector<double> tyre_n;
  std::vector<double> damper_n;
  std::vector<double> felt_m_s2;  // specific force of the sprung mass: +g at rest
  std::vector<double> ground_m;   // under the wheel: the axle's path, less the radius
  std::vector<double> sprung_m;   // height of the sprung mass
  std::vector<double> sprung_m_s;
  // What inertial units feel along the shaft, as means over one interval around the sample: the
  // sprung mass's acceleration with gravity, and the shaft's.
  std::vector<double> sprung_specific_m_s2;
  std::vector<double> shaft_m_s2;
  std::vector<std::uint8_t> airborne;
  std::vector<run::EndStop> bottom_outs;  // contract section 1, found at the integrator's step
};

struct Truth {
  double rate_hz = 0.0;  // sample i stands at i / rate_hz
  Progress progress;
  std::optional<EndTruth> front;
  std::optional<EndTruth> rear;

  std::size_t samples() const { return progress.distance_m.size(); }
  const std::optional<EndTruth>& end(bike::EndName name) const {
    return name == bike::EndName::front ? front : rear;
  }
};

// Rides the scene: both ends over the same ground, the rear one wheelbase behind (1.2 m where the
// bike file has none). The truth's rate is the logger's, or the least multiple of it that reaches
// 1 kHz. Each end starts at rest. Cost: about 0.1 us an end and step. Throws core::JobError as
// VehicleEnd::from does.
Truth simulate(const Scene& scene);

// One end of a ride, for those who have the parts. `behind_m`: how far this wheel follows.
struct EndRide {
  double rate_hz = 1000.0;
  double step_s = 1e-4;
  double behind_m = 0.0;
  double bottom_out_within_m = 4e-3;
};
EndTruth ride_end(const VehicleEnd& end, const WheelPath& path, const Progress& progress,
                  const EndRide& ride);

}  // namespace clickwise::sim
