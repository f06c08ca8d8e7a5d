// From one direction of the bike file's damper to its law.
#pragma once

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/law.hpp"

namespace clickwise::damper {

// At the side's present settings.
Law law_of(const bike::HydraulicSide& side);

}  // namespace clickwise::damper
