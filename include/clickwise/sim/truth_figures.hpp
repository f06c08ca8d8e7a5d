// What a review of an invented ride ought to find.
#pragma once

#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/sim/scene.hpp"

namespace clickwise::sim {

// Seconds, and percentiles of speed over the riding time in that direction.
struct BandTruth {
  double split_m_s = 0.0;
  double low_s = 0.0;  // at or below the split
  double high_s = 0.0;
  double p50_m_s = 0.0;  // NaN when the end never moved that way
  double p95_m_s = 0.0;
  double max_m_s = 0.0;
};

struct EndFigures {
  BandTruth compression;  // a velocity of exactly 0 counts here
  BandTruth rebound;
  double travel_mean_m = 0.0;
  double travel_p95_m = 0.0;
  double travel_max_m = 0.0;
  double airborne_s = 0.0;
  std::vector<run::EndStop> bottom_outs;
};

// Over riding time: standing of more than 5 s at either end is left out (contract section 1).
// Splits: the bike file's, else the knee of the damper's curve at its clicks; where it has none (no
// valve), all is low-speed. Throws core::JobError as VehicleEnd::from does.
EndFigures truth_figures(const Scene& scene, const Truth& truth, bike::EndName name);

}  // namespace clickwise::sim
