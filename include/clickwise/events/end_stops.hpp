// Bottom-outs and top-outs: excursions to one end of the stroke. docs/method/events.md, E1 to E4.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::events {

struct BottomOutOptions {
  double stroke_m = 0.0;        // > 0
  double within_m = 4e-3;       // counts when travel comes this close to the stroke; > 0
  double moving_mass_kg = 0.0;  // sprung share as felt at the shaft; 0: energy is not given
};

// One event an excursion, in order of time. The closing speed is shaft velocity where the travel
// first crosses stroke - within, found between samples on the cubic through travel and velocity
// (E1); the next one can come only after travel fell below stroke - max(4 within, 15 mm). depth_m
// is the largest travel until then, also between samples.
//
// counted (riding and valid) marks the samples that may be used, as many as the motion has. No
// crossing is read into masked time: an end that is beyond the line when the record or a masked
// stretch ends has no closing speed, so it is no event, and arms again below the lower line as
// usual. An excursion that a masked stretch interrupts above the lower line stays one excursion.
// Throws std::invalid_argument for options out of range or sizes that differ. O(samples).
std::vector<run::EndStop> bottom_outs(const run::Motion& motion,
                                      std::span<const std::uint8_t> counted,
                                      const BottomOutOptions& options);

// Common practice of the trade, no source: an end that merely comes to rest at full extension has
// not topped out, one that arrives there at speed has.
struct TopOutOptions {
  double within_m = 3e-3;         // of full extension; > 0
  double least_speed_m_s = 0.25;  // rebound speed at the crossing; >= 0
  double moving_mass_kg = 0.0;    // as for bottom-outs
};

// The mirror image: travel falls through `within`, at rebound speed (closing speed < 0); armed
// again above max(4 within, 15 mm); depth_m is the smallest travel.
std::vector<run::EndStop> top_outs(const run::Motion& motion, std::span<const std::uint8_t> counted,
                                   const TopOutOptions& options = {});

}  // namespace clickwise::events
