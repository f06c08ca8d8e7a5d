// Usable samples laid on the uniform base, in unbroken pieces. Private to motion.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/motion/time_base.hpp"

namespace clickwise::motion {

// Travel at base samples first, first + 1, ...
struct Piece {
  std::size_t first = 0;
  std::vector<double> travel_m;
};

// A piece ends at a hole in the clock and at a hole of more than longest_bridge samples that are
// not usable; shorter holes are bridged. Pieces do not overlap.
std::vector<Piece> resample(const run::Recording& recording, const UniformClock& clock,
                            std::span<const double> travel_m, std::span<const std::uint8_t> usable,
                            int longest_bridge);

}  // namespace clickwise::motion
