// The riding time: what every figure is taken over. docs/method/motion.md, M13.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/motion.hpp"

namespace clickwise::motion {

struct RidingOptions {
  double longest_rest_s = 5.0;  // contract section 1: a longer rest is standing
  double moving_m_s = 5e-3;     // mean shaft speed over a tenth of a second that is movement
  double moving_noises = 3.0;   // the same in units of the end's velocity noise; the larger rules
  double rolling_m_s = 0.3;     // a logged speed above it is riding
};

struct Riding {
  std::vector<std::uint8_t> mask;  // one per sample of the base: some end valid, and not standing
  double riding_s = 0.0;

  // Riding and valid at this end: the mask that its figures are taken over.
  std::vector<std::uint8_t> counted(const run::Motion& end) const;
};

// ends: one or two motions on the same base. speed_m_s: ridden speed on that base (NaN: none), or
// empty. Standing is told in blocks of a tenth of a second; a stretch without any valid end neither
// ends a rest nor counts as riding. Throws std::invalid_argument without ends or for bases or sizes
// that differ.
Riding riding(const std::vector<const run::Motion*>& ends, std::span<const double> speed_m_s = {},
              const RidingOptions& options = {});

}  // namespace clickwise::motion
