// The accelerometer on an end's sprung side, on the ride's time base.
#pragma once

#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/motion/time_base.hpp"
#include "clickwise/run/fault.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::motion {

struct SprungAccelMotion {
  std::vector<double> felt_m_s2;  // specific force, +g at rest; NaN where masked or not logged
  run::FaultLedger faults;        // of this channel
};

// Takes the last channel out of the recording, as the accelerometer's. Straight between readings
// (M3); masked with a sample on either side:
//   saturated  the highest or the lowest reading of the log where it stands three samples or more:
//              no hit peaks at the very same number so often in a row;
//   stuck      the whole channel, when it never changes.
// Throws std::out_of_range when there is no channel. O(samples).
SprungAccelMotion take_sprung_accel(run::Recording& recording, const bike::SprungAccel& accel,
                                    const UniformClock& clock);

}  // namespace clickwise::motion
