// From one direction of the bike file's damper to its law.
#pragma once

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/law.hpp"

namespace clickwise::damper {

// At the side's present settings.
Law law_of(const bike::HydraulicSide& side);

// A plausible range of clicks that gives `now` at the counted setting: an open bleed passes 10
// times what a closed one does, a closed valve opens at 4 times the force of an open one (common
// practice, no source).
bike::Clicks plausible_bleed(double now_m_s, const bike::Clicks& counted);
bike::Clicks plausible_valve(double now_n, const bike::Clicks& counted);

}  // namespace clickwise::damper
