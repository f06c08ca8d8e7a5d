// The accelerometer's lag behind the travel sensor, found and taken off, (A6). Private to sim.
#pragma once

#include "apparent_fit.hpp"

namespace clickwise::sim {

struct Realigned {
  std::vector<double> felt_m_s2;  // as it would have been without the lag
  double lag_s = 0.0;
};

// The lag at which the measured acceleration lies nearest to the fitted one, within a fraction of a
// sample; below half a sample, or at the furthest shift (a loop, no lag), it is taken as none.
Realigned realign(const SprungRide& ride, const ApparentSamples& samples, const Knots& knots,
                  const ApparentOptions& options);

}  // namespace clickwise::sim
