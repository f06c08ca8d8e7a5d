// What the inertial units of a ride would have measured, before noise.
//
// A unit's frame is the shaft's, turned by its mounting error: n, the bike file's axis, points up
// the shaft (sliding) or along the link's bearing (swinging); the bike pitches about the lateral
// direction, rolls and yaws a little while it moves, and feels gravity and its own braking.
#pragma once

#include <Eigen/Core>
#include <vector>

#include "clickwise/sim/logger.hpp"

namespace clickwise::sim {

struct ImuSignals {
  std::vector<Eigen::Vector3d> accel_m_s2;  // specific force, at the truth's rate
  std::vector<Eigen::Vector3d> gyro_rad_s;
};

struct ImuPairSignals {
  ImuSignals upper;
  ImuSignals lower;
};

ImuPairSignals imu_signals(const bike::Bike& bike, bike::EndName name, const ImuPlan& plan,
                           std::uint64_t seed, const Truth& truth);

// Of an accelerometer on the handlebar: what the sprung mass over the first end feels.
ImuSignals bar_signals(const bike::Bike& bike, std::uint64_t seed, const Truth& truth);

}  // namespace clickwise::sim
