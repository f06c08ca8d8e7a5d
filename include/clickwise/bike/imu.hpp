// Inertial units of an end, as the bike file names them.
#pragma once

#include <array>
#include <optional>

#include "clickwise/bike/column.hpp"
#include "clickwise/core/polyline.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

using ThreeColumns = std::array<ColumnRef, 3>;  // x, y, z of the unit's own frame
using Direction = std::array<double, 3>;        // of length 1

// Three accelerations of one unit, specific force: +1 g upwards at rest.
struct Accelerometer {
  ThreeColumns columns;
  double metres_per_second2_per_unit = core::standard_gravity_m_s2;
};

struct ImuUnit {
  std::optional<ThreeColumns> accel;  // of both units, or of none
  std::optional<ThreeColumns> gyro;
};

// Two units on one end. Sliding: `upper` on the sprung side and `lower` on the unsprung side of one
// shaft, both with accelerations. Swinging (swing_m is set): `upper` on the frame, `lower` on the
// link, both with gyros.
struct ImuPair {
  ImuUnit upper;
  ImuUnit lower;
  double metres_per_second2_per_unit = core::standard_gravity_m_s2;
  double radians_per_second_per_unit = core::radians_per_degree;
  Direction axis{0.0, 0.0, 1.0};          // lower against upper into compression; swinging: the
                                          // axis of a turn of the link into compression
  std::optional<double> range_m_s2;       // the accelerometer's end, where the log does not show it
  double spacing_m = 0.4;                 // from upper to lower along the shaft, at full extension
  std::optional<core::Polyline> swing_m;  // wheel travel over swing angle (rad), from extension

  bool swinging() const { return swing_m.has_value(); }
};

}  // namespace clickwise::bike
