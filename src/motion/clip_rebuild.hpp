// Accelerations where the lower unit stood at its range, rebuilt with what is known of their error.
// Private to motion.
#pragma once

#include <optional>

#include "axial.hpp"

namespace clickwise::motion {

struct Rebuilt {
  std::vector<double> relative_m_s2;  // x''
  std::vector<double> variance;       // of each, as if the samples' errors were independent
};

// A clipped run of L samples is an arch on the range: a parabola with the mean of the slopes that
// lead in and out, its mean rise E wrong by 0.8 E + 100 m/s^2 as a whole. Where the upper unit is
// pulled hard (metal at full extension: below -6 m/s^2) or pushed hard (above 60 m/s^2) the shaft's
// own force is most of what moves the wheel, and the lower acceleration is -mass_ratio times the
// upper (sprung over unsprung mass). Between clips the error is the reading noise and 5 % of the
// local second difference: what a sample a millisecond cannot follow.
Rebuilt rebuild(const Axial& axial, std::optional<double> mass_ratio);

}  // namespace clickwise::motion
