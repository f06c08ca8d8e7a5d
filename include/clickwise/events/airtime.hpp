// Time in the air: every end near full extension at once. docs/method/events.md, E5.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::events {

// Settings from common practice, no source.
struct AirtimeOptions {
  double within_m = 8e-3;   // of full extension: friction and a bump stop hold an end off it
  double shortest_s = 0.1;  // less is a light wheel, not a jump
  double longest_s = 4.0;   // more is a bike that was lifted or hung up
};

// One end as airtime sees it. Both point to data that outlives the call.
struct AirtimeEnd {
  const run::Motion* motion;
  std::span<const std::uint8_t> counted;  // riding and valid
};

// In order of time. The ends share one time base. With a single end, its time near full extension
// is what there is; a fork alone is off the ground in a manual too. A masked sample of either end
// closes the stretch: nothing is known there. Throws std::invalid_argument without an end, or for
// time bases that differ.
std::vector<run::Airtime> airtimes(const std::vector<AirtimeEnd>& ends,
                                   const AirtimeOptions& options = {});

}  // namespace clickwise::events
