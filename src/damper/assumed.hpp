// A plausible hydraulic damper from a damping ratio (docs/method/damper.md, section 3).
#pragma once

#include "clickwise/bike/bike.hpp"

namespace clickwise::damper {

// Scaled by the end's spring at sag and its sprung mass, both of which must be there. Throws
// core::JobError when the spring has no rate there.
bike::HydraulicDamper laid_out(const bike::AssumedDamper& assumed, const bike::End& end,
                               double sprung_mass_kg, const core::Place& place);

}  // namespace clickwise::damper
