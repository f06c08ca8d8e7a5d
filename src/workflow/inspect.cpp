#include "clickwise/workflow/inspect.hpp"

#include <algorithm>
#include <cctype>
#include <limits>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/bike/starter.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/workflow/ride.hpp"

namespace clickwise::workflow {

namespace {

bike::ColumnRef reference(const logs::ColumnFacts& column) {
  return column.name.empty() ? bike::ColumnRef{"", column.number} : bike::ColumnRef{column.name, 0};
}

bool names_any(const std::string& name, const std::vector<std::string>& words) {
  std::string small = name;
  std::transform(small.begin(), small.end(), small.begin(),
                 [](unsigned char letter) { return static_cast<char>(std::tolower(letter)); });
  return std::any_of(words.begin(), words.end(), [&](const std::string& word) {
    return small.find(word) != std::string::npos;
  });
}

bool is_speed(const std::string& name) {
  return names_any(name, {"speed", "kmh", "km_h", "km/h", "kph"});
}

bool is_travel(const std::string& name) {
  return names_any(name, {"fork", "shock", "front", "rear", "travel", "susp", "pot", "adc"});
}

bike::StarterFacts starter_facts(const logs::LogFacts& facts) {
  bike::StarterFacts starter;
  starter.log_name = facts.name;
  if (facts.time && facts.time->unit != "date") {
    starter.time = reference(facts.columns[facts.time->column]);
    starter.time_unit = facts.time->unit;
  }
  std::vector<bike::StarterColumn> others;
  for (std::size_t i = 0; i < facts.columns.size(); ++i) {
    const logs::ColumnFacts& column = facts.columns[i];
    if (column.kind != logs::ColumnKind::number || (facts.time && facts.time->column == i))
      continue;
    if (is_speed(column.name)) {
      if (!starter.speed) {
        starter.speed = reference(column);
        starter.speed_unit = names_any(column.name, {"m/s", "m_s", "mps"}) ? "m/s" : "km/h";
      }
      continue;
    }
    (is_travel(column.name) ? starter.candidates : others)
        .push_back({reference(column), column.least, column.most});
  }
  starter.candidates.insert(starter.candidates.end(), others.begin(), others.end());
  return starter;
}

InspectedEnd inspect_end(const bike::Bike& bike, const RideEnd& ride) {
  const bike::End& end = *bike.end(ride.name);
  InspectedEnd result{ride.name, end.sensor.column.label()};
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
  if (usable == 0) result.least_m = result.most_m = std::numeric_limits<double>::quiet_NaN();
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
  if (bike_path.empty()) {
    inspection.facts = logs::inspect_text_log(log_path);
    inspection.faults = inspection.facts.faults;
    inspection.notes = inspection.facts.notes;
    inspection.starter_bike = bike::starter_bike(starter_facts(inspection.facts));
    return inspection;
  }
  const bike::Bike bike = bike::read_bike_file(bike_path);
  inspection.facts = logs::inspect_text_log(log_path, &bike.log);
  inspection.faults = inspection.facts.faults;
  inspection.notes = inspection.facts.notes;
  inspect_motion(log_path, bike_path, inspection);
  return inspection;
}

}  // namespace clickwise::workflow
