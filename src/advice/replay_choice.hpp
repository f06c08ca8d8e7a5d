// The step for one end, chosen by replay: every move of one adjuster by a few clicks, ridden over
// the ground of the ride itself, judged by the summed severity of what is off its aim.
#pragma once

#include <vector>

#include "end_choice.hpp"

namespace clickwise::advice {

// `measured`: every figure of this end. Needs ride.vehicle, ride.damper and ride.bike. Throws
// core::JobError when no stretch of the ride is long enough to replay.
EndChoice choose_by_replay(const EndRide& ride, const std::vector<Symptom>& measured,
                           const AdviceOptions& options);

}  // namespace clickwise::advice
