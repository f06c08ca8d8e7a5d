// The uniform time base of a log, and where each sample stands on it. docs/method/motion.md, M1-M3.
#pragma once

#include <span>
#include <vector>

#include "clickwise/run/motion.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::motion {

// One base for the whole log, so that both ends and every event share it: the recording's robust
// mean interval, from the first sample to the last, through its gaps.
//
// place[i] is the position of sample i on the base, in samples, increasing inside a stretch. In a
// stretch whose stamps lie on a straight line to within 3 % of an interval, or to within the
// rounding of the stamps, the samples were taken evenly: they keep their spacing and are laid on
// the nearest points of the base (off by less than half an interval, alike for every channel),
// unless the stretch's own rate would drift by more than a fifth of a sample. Stamps that jitter
// by more are believed.
struct UniformClock {
  run::TimeBase base;
  std::vector<double> place;
};

// Throws core::JobError when the recording has fewer than two samples or no positive interval, or
// a clock that spans more than 2e8 of them.
UniformClock uniform_clock(const run::Recording& recording);

// A channel on the base without smoothing: straight between the two readings around each point,
// NaN outside the clock's stretches and next to a missing reading. For a speed, for example.
std::vector<double> on_base(const run::Recording& recording, std::size_t channel,
                            const UniformClock& clock);

}  // namespace clickwise::motion
