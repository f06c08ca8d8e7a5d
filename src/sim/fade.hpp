// Whether the damping changes along the ride, (A7). Private to sim.
#pragma once

#include <optional>

#include "apparent_fit.hpp"

namespace clickwise::sim {

// Empty when the ride has too few windows to tell.
std::optional<Fade> find_fade(const SprungRide& ride, std::span<const double> felt_m_s2,
                              const ApparentSamples& samples, const Knots& knots,
                              const ApparentFit& fit, const ApparentOptions& options);

}  // namespace clickwise::sim
