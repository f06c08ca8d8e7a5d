// What each change that could be tried does to each symptom, ridden over the ground of the ride
// itself on every bike of the ensemble.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/advice/advise.hpp"
#include "clickwise/sim/replay.hpp"
#include "trials.hpp"

namespace clickwise::advice {

// One trial's severities by draw and symptom.
struct Outcome {
  std::vector<std::vector<double>> severity;  // [draw][symptom]

  double mean(std::size_t symptom) const;
  std::vector<double> means() const;
};

struct Outcomes {
  std::vector<ClickTrial> clicks;
  std::vector<PartTrial> parts;
  std::vector<double> now;               // severity of each symptom as recorded
  std::vector<std::uint8_t> for_clicks;  // whether it is a job for clicks: is_for_clicks
  std::vector<Outcome> of_clicks;        // as clicks
  std::vector<Outcome> of_parts;         // as parts
  sim::ReplayResult result;              // predictions: clicks first, then parts
};

// What clicks bring: the summed severity that they take away. What is not for clicks counts only
// where it gets worse, so that none is turned for the spring's sake.
double benefit_of_clicks(std::span<const std::uint8_t> for_clicks, std::span<const double> now,
                         std::span<const double> then);

// `measured`: every figure of this end. Needs ride.vehicle, ride.damper and ride.bike. A figure
// then is the recorded one moved by what the model says would change: by the bike as it is written
// over the whole ride, and by how the draws differ from it over the pieces that they rode. Throws
// what sim::replay throws.
Outcomes ride_trials(const EndRide& ride, const std::vector<Symptom>& measured,
                     const AdviceOptions& options);

}  // namespace clickwise::advice
