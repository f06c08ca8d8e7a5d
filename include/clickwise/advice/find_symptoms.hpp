// The symptoms of a ride, from its figures and their sampling uncertainty.
#pragma once

#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/advice/symptom.hpp"
#include "clickwise/bike/bike.hpp"

namespace clickwise::advice {

// Every figure that has an aim, of every end, whether the aim is crossed or not. Sampling
// uncertainty: shares and means by bootstrap over blocks of 5 s of riding (seeded), the largest
// travel by how the largest hits differ, rates of events by the gamma posterior of a Poisson rate
// with Jeffreys' prior. An end with under 10 s of counted riding time has none.
std::vector<Symptom> measure_symptoms(const std::vector<EndRide>& rides, const bike::Aims& aims,
                                      unsigned seed);

// Those that cross their aim, most severe first.
std::vector<Symptom> find_symptoms(std::vector<Symptom> measured);

// The same of rides.
std::vector<Symptom> find_symptoms(const std::vector<EndRide>& rides, const bike::Aims& aims,
                                   unsigned seed);

// Whether a bottom-out of this end counts as hard: met above the compression split.
bool is_hard(const EndRide& ride, const run::EndStop& bottom_out);

// Where spring and sprung weight balance, % of the stroke. Empty when either is not known.
std::optional<double> static_sag_percent(const EndRide& ride);

// Damping ratio of the body on this end: the energy-equivalent linear damping of compression and
// rebound at a shaft speed of 0.15 m/s, over 2 sqrt(k m) at the mean riding travel, both at the
// wheel. Empty when damper, spring or masses are not known.
std::optional<double> body_damping_ratio(const EndRide& ride, const damper::Curve& curve);

}  // namespace clickwise::advice
