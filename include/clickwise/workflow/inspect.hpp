// What the `inspect` command tells: what a log holds, and with a bike file what it makes of it.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/adjuster.hpp"
#include "clickwise/logs/facts.hpp"
#include "clickwise/run/fault.hpp"

namespace clickwise::workflow {

// One end's travel, as the bike file's sensor gives it.
struct InspectedEnd {
  bike::EndName name = bike::EndName::front;
  std::string channel;
  double least_m = 0.0;  // travel of the usable readings
  double most_m = 0.0;
  double stroke_m = 0.0;
  double usable_s = 0.0;
  double reading_noise_m = 0.0;
};

struct Inspection {
  logs::LogFacts facts;
  std::string starter_bike;        // a bike file to complete; empty when one was given
  std::vector<InspectedEnd> ends;  // with a bike file only
  run::FaultLedger faults;         // the log's, and with a bike file its sensors' too
  std::vector<std::string> notes;
};

// bike_path may be empty. Throws core::InputError for files that cannot be read.
Inspection inspect(const std::string& log_path, const std::string& bike_path);

}  // namespace clickwise::workflow
