// Shaft motion of a swinging link by its two gyros. Private to motion.
#pragma once

#include "imu_series.hpp"
#include "slide.hpp"

namespace clickwise::motion {

// The link's bearing in each unit's own frame, out of the readings: the lower one is the principal
// axis of what the gyros differ by; across it both feel the frame alone, and the plane in which the
// upper one feels that gives the upper one. The bike file's axis where the ride does not tell.
struct Bearings {
  Eigen::Vector3d upper;
  Eigen::Vector3d lower;
};

Bearings bearings(const PairSeries& series, const bike::ImuPair& pair);

// State swing angle q and rate bias b: q' = w - b, w = the turning of the lower unit about its
// bearing less that of the upper one, observed at the ends of the stroke and, widely, at the sag's
// angle; shaft velocity
//   v = (w - b) (dz/dq) / r(x),   z(q) the bike file's swing, x from z by the ratio          (I7)
// seen_travel_m: a potentiometer's, as in SlideSettings.
Slid swing(const PairSeries& series, const Bearings& bearings, const bike::End& end,
           const SlideSettings& settings);

}  // namespace clickwise::motion
