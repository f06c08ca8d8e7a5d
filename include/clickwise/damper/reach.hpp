// Reach: what one click of an adjuster moves on this ride, in joules, by speed band.
#pragma once

#include <vector>

#include "clickwise/core/density.hpp"
#include "clickwise/damper/damper.hpp"

namespace clickwise::damper {

// Seconds over shaft speed (m/s, >= 0), one density a direction.
struct RideDensity {
  core::Density compression;
  core::Density rebound;
};

// Joules per click firmer, and the share of the damper's own work in that band.
struct Reach {
  bike::Adjuster adjuster = bike::Adjuster::low_speed_compression;
  double low_j = 0.0;
  double high_j = 0.0;
  double low_share = 0.0;  // 0 when the damper did no work there
  double high_share = 0.0;
};

// reach = sum over cells of |F(v; one click firmer) - F(v; now)| v t(v), below (at or below the
// split: low) and above it; method section 8. An adjuster already closed is taken one click softer
// instead. Split in m/s for the adjuster's own direction.
Reach reach(const Damper& damper, bike::Adjuster adjuster, const RideDensity& density,
            double split_m_s);

}  // namespace clickwise::damper
