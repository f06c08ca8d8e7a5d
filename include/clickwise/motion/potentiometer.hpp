// Travel and velocity of an end with a travel sensor. docs/method/motion.md.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/motion/calibration.hpp"
#include "clickwise/motion/reading_faults.hpp"
#include "clickwise/motion/time_base.hpp"
#include "clickwise/run/motion.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::motion {

struct MotionOptions {
  std::optional<double> smooth_span_s;  // --smooth: a fixed quadratic fit over this span (s, > 0)
  ReadingFaultOptions faults;
  int longest_bridge_samples = 3;  // a shorter hole is bridged for the smoother, yet not valid
};

struct PotentiometerMotion {
  run::Motion motion;
  run::FaultLedger faults;  // of this channel's readings; the clock's are the recording's
  StrokeExcess excess;
  std::vector<std::string> notes;  // sentences for the user
};

// The motion on the clock's base. valid is 1 where a reading stands behind the travel and the
// velocity is known: not in gaps, not at masked samples, not in a stretch shorter than the
// smoother's span. When nothing at all is usable, every sample is invalid and a note says so.
// Measured errors: docs/method/motion.md. Throws std::out_of_range for a channel that the recording
// does not have, std::invalid_argument for options out of range. O(samples log samples).
PotentiometerMotion from_potentiometer(const run::Recording& recording, std::size_t channel,
                                       const bike::End& end, const UniformClock& clock,
                                       const MotionOptions& options = {});

// The same on the recording's own clock. Throws core::JobError as uniform_clock() does.
PotentiometerMotion from_potentiometer(const run::Recording& recording, std::size_t channel,
                                       const bike::End& end, const MotionOptions& options = {});

}  // namespace clickwise::motion
