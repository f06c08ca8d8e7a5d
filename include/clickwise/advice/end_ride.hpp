// What the advice looks at: one end's ride, with what is known of its parts.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/core/density.hpp"
#include "clickwise/damper/damper.hpp"
#include "clickwise/damper/reach.hpp"
#include "clickwise/run/event.hpp"
#include "clickwise/run/motion.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::advice {

// Views only: the caller keeps what is pointed to alive. `counted` marks the samples of riding time
// that count for this end.
struct EndRide {
  bike::EndName name = bike::EndName::front;
  const bike::End* end = nullptr;
  const run::Motion* motion = nullptr;
  const std::vector<std::uint8_t>* counted = nullptr;
  const std::vector<run::EndStop>* bottom_outs = nullptr;
  const std::vector<run::EndStop>* top_outs = nullptr;
  const std::vector<run::HitTrain>* trains = nullptr;
  const std::vector<run::Airtime>* airtimes = nullptr;  // null when not looked for
  const damper::Damper* damper = nullptr;               // null when the bike file has none
  const bike::Bike* bike = nullptr;
  std::optional<sim::VehicleEnd> vehicle;  // empty when the bike file knows too little of it
  std::string no_vehicle;                  // why, with the keys to add; empty otherwise
  std::optional<double> sprung_mass_kg;
  double compression_split_m_s = 0.0;
  double rebound_split_m_s = 0.0;
};

// A stretch of the ride on its time base: [begin_s, end_s).
struct Window {
  double begin_s = 0.0;
  double end_s = 0.0;
};

// Top-outs on the ground: one at a take-off or in the air is the ride's, not the rebound's.
std::vector<run::EndStop> top_outs_on_the_ground(const EndRide& ride);

// Seconds over shaft speed of the counted samples, in cells of 5 mm/s; the whole ride, or within
// windows (which must not overlap).
damper::RideDensity ride_density(const EndRide& ride);
damper::RideDensity ride_density(const EndRide& ride, const std::vector<Window>& windows);

}  // namespace clickwise::advice
