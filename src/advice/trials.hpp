// What could be changed on an end, for a replay to try: every move of one adjuster by a few clicks,
// and the parts that a setter would turn to next.
#pragma once

#include <string>
#include <vector>

#include "clickwise/advice/end_ride.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::advice {

struct ClickTrial {
  damper::AdjusterRange range;
  int to = 0;
  sim::VehicleEnd end;
};

// All moves of single adjusters by 1 to `most_clicks`, within their ranges.
std::vector<ClickTrial> click_trials(const EndRide& ride, int most_clicks);

struct PartTrial {
  std::string part;   // "spring", "volume"
  std::string words;  // "10 % more spring force"
  bool firmer = true;
  sim::VehicleEnd end;
};

// Spring force 10 and 20 % up and down, and an end of the stroke that rises more steeply (an air
// chamber a tenth smaller, or a bumper half as strong again). Empty without a spring.
std::vector<PartTrial> part_trials(const EndRide& ride);

}  // namespace clickwise::advice
