// How fast the bike goes: along the trail or over time.
#pragma once

#include <optional>
#include <vector>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/polyline.hpp"

namespace clickwise::sim {

struct SpeedPlan {
  core::Place place;                 // for messages
  bool over_time = false;            // points over seconds of riding instead of metres of trail
  core::Polyline speed_m_s;          // held beyond its ends
  double pace = 1.0;                 // factor on every speed
  std::optional<double> length_m;    // the ride ends here,
  std::optional<double> duration_s;  // or after this time of riding; one of the two is set
  double stand_before_s = 0.0;       // at rest at 0 m
  double stand_after_s = 0.0;        // at rest at the end
};

// Distance and speed at i / rate_hz.
struct Progress {
  std::vector<double> distance_m;
  std::vector<double> speed_m_s;
  double ride_begin_s = 0.0;  // standing before, and from ride_end_s on
  double ride_end_s = 0.0;
};

// Rolls off and brakes at 4 m/s^2; never slower than 0.3 m/s between the two, so that every ride
// ends. First order in 1 / rate. Throws core::JobError beyond ten million samples (2.8 h at 1 kHz).
Progress progress(const SpeedPlan& plan, double rate_hz);

}  // namespace clickwise::sim
