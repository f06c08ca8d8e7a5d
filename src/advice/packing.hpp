// How packing down would change: hit trains of the replayed ride itself.
#pragma once

#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/sim/ensemble.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::advice {

// Mean climb per hit over the trains of a ride, m, weighted by hits; 0 without trains.
double climb_m_per_hit(const std::vector<run::HitTrain>& trains);

// Modelled climb per hit for each setting, [draw][setting], over the stretches
// around the ride's own trains.
std::vector<std::vector<double>> modelled_climbs(const EndRide& ride,
                                                 const std::vector<sim::VehicleEnd>& settings,
                                                 const std::vector<sim::Draw>& draws);

}  // namespace clickwise::advice
