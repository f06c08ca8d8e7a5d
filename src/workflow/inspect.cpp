#include "clickwise/workflow/inspect.hpp"

#include <algorithm>
#include <limits>

#include "archived_facts.hpp"
#include "clickwise/archive/run_archive.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/bike/starter.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/workflow/ride.hpp"
#include "starter_facts.hpp"

namespace clickwise::workflow {

namespace {

InspectedEnd inspect_end(const bike::Bike& bike, const RideEnd& ride) {
  const bike::End& end = *bike.end(ride.name);
  InspectedEnd result{ride.name, end.has_potentiometer() ? end.sensor.column.label() : "IMU pair"};
  result.stroke_m = end.stroke_m;
  result.reading_noise_m = ride.motion.reading_noise_m;
  result.least_m = std::numeric_limits<double>::infinity();
  result.most_m = -result.least_m;
  std::size_t usable = 0;
  for (std::size_t i = 0; i < ride.motion.valid.size(); ++i) {
    if (!ride.motion.valid[i]) continue;
    ++usable;
    result.least_m = std::min(result.least_m, ride.motion.travel_m[i]);
    result.most_m = std::max(result.most_m, ride.motion.travel_m[i]);
  }
  result.usable_s = static_cast<double>(usable) * ride.motion.time.interval_s();
  if (usable == 0 || !ride.motion.travel_known)
    result.least_m = result.most_m = std::numeric_limits<double>::quiet_NaN();
  return result;
}

void inspect_motion(const std::string& log_path, const std::string& bike_path,
                    Inspection& inspection) {
  try {
    const Ride ride = load_ride({log_path, bike_path, {}});
    inspection.faults = ride.log.faults;
    inspection.notes = ride.notes;
    for (const RideEnd& end : ride.ends) inspection.ends.push_back(inspect_end(ride.bike, end));
  } catch (const core::JobError& error) {
    inspection.notes.emplace_back(error.what());
  }
}

}  // namespace

Inspection inspect(const std::string& log_path, const std::string& bike_path) {
  Inspection inspection;
  if (archive::is_archive(log_path)) {
    inspection.facts = archived_facts(log_path);
    inspect_motion(log_path, bike_path, inspection);
    return inspection;
  }
  if (bike_path.empty()) {
    inspection.facts = logs::inspect_log(log_path);
    inspection.faults = inspection.facts.faults;
    inspection.notes = inspection.facts.notes;
    inspection.starter_bike = bike::starter_bike(starter_facts(inspection.facts));
    return inspection;
  }
  const bike::Bike bike = bike::read_bike_file(bike_path);
  inspection.facts = logs::inspect_log(log_path, &bike.log);
  inspection.faults = inspection.facts.faults;
  inspection.notes = inspection.facts.notes;
  inspect_motion(log_path, bike_path, inspection);
  return inspection;
}

}  // namespace clickwise::workflow
