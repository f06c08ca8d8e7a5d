// How far a replayed ride is from its aims: the figure of each symptom, as the model gives it.
#pragma once

#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/advice/symptom.hpp"
#include "clickwise/damper/law.hpp"
#include "clickwise/sim/replay.hpp"

namespace clickwise::advice {

// The symptom's figure in a modelled ride, in the unit of unit(kind), with the compression curve
// that it was ridden on. NaN for a figure that a replay does not give (packs_down, wallows).
double modelled_value(SymptomKind kind, const sim::EndFigures& figures,
                      const damper::Law& compression, const EndRide& ride);

// Distance beyond the aim in units of the symptom's own error; 0 within the aim.
double severity_at(const Symptom& symptom, double value);

}  // namespace clickwise::advice
