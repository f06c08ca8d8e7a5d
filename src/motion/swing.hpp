// Shaft motion of a swinging link by its two gyros. Private to motion.
#pragma once

#include "imu_series.hpp"
#include "slide.hpp"

namespace clickwise::motion {

// State swing angle q and rate bias b: q' = w - b, w = axis . (turned lower - upper), observed at
// the ends of the stroke and, widely, at the sag's angle; shaft velocity
//   v = (w - b) (dz/dq) / r(x),   z(q) the bike file's swing, x from z by the ratio          (I7)
// seen_travel_m: a potentiometer's, as in SlideSettings.
Slid swing(const PairSeries& series, const bike::End& end, const SlideSettings& settings);

}  // namespace clickwise::motion
