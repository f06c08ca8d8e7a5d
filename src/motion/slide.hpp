// The smoother of a sliding pair. Private to motion.
#pragma once

#include "clip_rebuild.hpp"
#include "force_map.hpp"

namespace clickwise::motion {

struct SlideSettings {
  double stroke_m = 0.0;
  double interval_s = 0.0;
  double sag_m = 0.0;                      // what the long mean hangs on
  ForceMap::SpringCurve spring_m_s2 = {};  // spring force over sprung mass; may be empty
  // Travel of a potentiometer at each sample and the variance of its error; NaN where it has none.
  // Empty: the units are alone.
  std::vector<double> seen_travel_m = {};
  double seen_variance_m2 = 0.0;
};

struct Slid {
  std::vector<double> travel_m;
  std::vector<double> velocity_m_s;
  std::vector<double> travel_sigma_m;
  std::vector<double> velocity_sigma_m_s;
};

// State x, v, b (travel, velocity, bias of the relative acceleration):
//   v' = a - b,  x' = v,  b a slow random walk;   a from rebuild()                        (I4)
// Each pass observes at every sample the sag (wide), the potentiometer where there is one, the ends
// of the stroke where the last pass left it, x = 0 where the upper unit is pulled down by the
// top-out stop, x = v = 0 where both units have fallen freely for 80 ms, and, from the second pass
// on, the force map at the last pass's travel and velocity (I5).
Slid slide(const Axial& axial, const Rebuilt& rebuilt, const SlideSettings& settings);

}  // namespace clickwise::motion
