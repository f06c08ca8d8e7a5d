// The same ground ridden again, one end, one setting: the plain loop that the lanes are checked
// and timed against.
#pragma once

#include <vector>

#include "clickwise/sim/inverse.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

// Sample i of the stretch; the first is the recorded state.
struct Ridden {
  std::vector<double> travel_m;
  std::vector<double> velocity_m_s;
};

// Rides `end` over the recovered ground: sim::step's scheme in the frame of the forcing. O(steps).
Ridden ride_forward(const VehicleEnd& end, const Forcing& forcing);

}  // namespace clickwise::sim
