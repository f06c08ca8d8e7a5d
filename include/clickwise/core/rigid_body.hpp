// Kinematics of a rigid body, for sensors that do not sit where the motion is asked for.
#pragma once

#include <Eigen/Core>

namespace clickwise::core {

// How a frame turns: rates in rad/s and rad/s^2.
struct Turning {
  Eigen::Vector3d rate = Eigen::Vector3d::Zero();
  Eigen::Vector3d acceleration = Eigen::Vector3d::Zero();
};

// a_P - a_O = alpha x r + w x (w x r) + 2 w x r' + r'' for a point at r (m) from O, moving with r',
// r'' inside the turning frame (rigid-body kinematics; r' = r'' = 0 for a point fixed in it).
inline Eigen::Vector3d transport(const Turning& turning, const Eigen::Vector3d& r,
                                 const Eigen::Vector3d& r_rate = Eigen::Vector3d::Zero(),
                                 const Eigen::Vector3d& r_acceleration = Eigen::Vector3d::Zero()) {
  const Eigen::Vector3d& w = turning.rate;
  const auto cross = [](const Eigen::Vector3d& a, const Eigen::Vector3d& b) {
    return Eigen::Vector3d(a.y() * b.z() - a.z() * b.y(), a.z() * b.x() - a.x() * b.z(),
                           a.x() * b.y() - a.y() * b.x());
  };
  return cross(turning.acceleration, r) + cross(w, cross(w, r)) + 2.0 * cross(w, r_rate) +
         r_acceleration;
}

}  // namespace clickwise::core
