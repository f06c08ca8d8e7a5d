// One ride made ready: the log read, its ends turned into motion, the riding time found.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/run/fault.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::workflow {

// What the log as a whole is worth.
struct LogSummary {
  std::string name;
  double duration_s = 0.0;  // first sample to last
  double riding_s = 0.0;    // valid on some end, less standing
  double rate_hz = 0.0;
  std::size_t samples = 0;
  run::FaultLedger faults;
};

struct RideEnd {
  bike::EndName name = bike::EndName::front;
  run::Motion motion;
  std::vector<std::uint8_t> counted;   // riding and valid
  double riding_s = 0.0;               // of this end
  std::vector<double> felt_m_s2 = {};  // sprung side's accelerometer, NaN where not known; or empty
};

struct Ride {
  bike::Bike bike;
  LogSummary log;
  std::vector<RideEnd> ends;       // front first; one or two
  std::vector<std::string> notes;  // what was guessed, what looked odd
};

struct RideOptions {
  std::string log_path;
  std::string bike_path;
  std::optional<double> smooth_span_s;  // a filter span chosen by hand
};

// Throws core::InputError for files that cannot be read, core::JobError when the log holds no
// usable ride.
Ride load_ride(const RideOptions& options);

}  // namespace clickwise::workflow
