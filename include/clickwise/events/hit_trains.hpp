// Hit trains: compressions that follow each other faster than the end can recover.
// docs/method/events.md, E6 and E7.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::events {

// Settings from common practice, no source.
struct HitTrainOptions {
  double stroke_m = 0.0;            // > 0
  double least_rise_share = 0.08;   // of the stroke: a smaller rise of travel is no hit
  double longest_spacing_s = 0.35;  // from the start of one hit to the start of the next
  int fewest_hits = 3;              // >= 2
};

// In order of time. A hit starts at the low turning point of travel and ends at the high one; a
// turn counts when travel moves least_rise_share of the stroke back. The climb is the least-squares
// slope of the start travel over the hit's number: above 0 the end packs down. A masked sample ends
// a train. Throws std::invalid_argument for options out of range or sizes that differ. O(samples).
std::vector<run::HitTrain> hit_trains(const run::Motion& motion,
                                      std::span<const std::uint8_t> counted,
                                      const HitTrainOptions& options);

}  // namespace clickwise::events
