// The step for one end by rule: the reach of a click where the symptom is made, and the signs of
// physics. For bikes that the file knows too little of to replay.
#pragma once

#include <vector>

#include "end_choice.hpp"

namespace clickwise::advice {

// `crossed`: the symptoms of this end that cross their aims, most severe first.
EndChoice choose_by_rule(const EndRide& ride, const std::vector<Symptom>& crossed,
                         const AdviceOptions& options);

}  // namespace clickwise::advice
