// One shaft's accelerations out of two units' readings. Private to motion.
#pragma once

#include <vector>

#include "imu_series.hpp"

namespace clickwise::motion {

// Along the shaft, upwards, SI, on the uniform base.
struct Axial {
  std::vector<double> upper_m_s2;     // specific force of the sprung side
  std::vector<double> lower_m_s2;     // of the unsprung side, turned into the upper unit's frame
  std::vector<double> rotation_m_s2;  // what rotation adds to lower - upper
  std::vector<std::uint8_t> usable;   // both units
  std::vector<std::int8_t> clipped;   // of the lower unit; 2 where the upper one clips
  double lower_range_m_s2 = 0.0;
  double mounting_rad = 0.0;  // angle found between the units
};

// Mounting: the small turn p of the lower unit against the upper one solves
//   w_upper = w_lower + p x w_lower + b        least squares over the ride's turning        (I1)
// and the shaft's direction n is the principal axis of what the accelerations then differ by,
// nearest to the bike file's axis (I2). Rotation, for units `spacing` apart at full extension:
//   n . (f_lower - f_upper) = x'' + (spacing - x) |w_perp|^2                               (I3)
// with x taken as sag_m: its error times |w|^2 is below the noise.
Axial axial(const PairSeries& series, const bike::ImuPair& pair, double sag_m);

}  // namespace clickwise::motion
