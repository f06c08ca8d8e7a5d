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
  std::vector<std::uint8_t> counted = {};  // riding and valid
  double riding_s = 0.0;                   // of this end
  std::vector<double> felt_m_s2 = {};  // sprung side's accelerometer, NaN where not known; or empty
  run::Source measured_by = run::Source::potentiometer;  // also where the motion's is an archive
};

// Directive 2002/44/EC, article 3(1): daily exposure A(8) of hand and arm.
inline constexpr double hand_arm_action_m_s2 = 2.5;
inline constexpr double hand_arm_limit_m_s2 = 5.0;

// Vibration at the handlebar over the riding time.
struct HandArm {
  double weighted_rms_m_s2 = 0.0;    // a_hv: root of the sum of squares of the three axes
  double daily_exposure_m_s2 = 0.0;  // A(8), if this run were all of the day's riding
  double rate_hz = 0.0;              // half of it is the highest frequency that was felt
};

struct Ride {
  bike::Bike bike;
  LogSummary log;
  std::vector<RideEnd> ends;         // front first; one or two, on one time base
  std::vector<std::uint8_t> riding;  // one per sample of the base
  std::vector<double> speed_m_s;     // ridden speed on the base, NaN: none; empty: not logged
  std::optional<HandArm> hand_arm;
  std::vector<std::string> notes;  // what was guessed, what looked odd
};

struct RideOptions {
  std::string log_path;                 // a log, or the archive of a run
  std::string bike_path;                // may be empty for an archive, which brings its own
  std::optional<double> smooth_span_s;  // a filter span chosen by hand
};

// Motions and speeds are rounded to what an archive keeps (archive::round_to_stored), so that a log
// and its archive give the same ride, but for the motions' source. A bike file given with an
// archive rules over the stored one; a note tells where travel was made by another stroke or
// sensor. Throws core::InputError for files that cannot be read, a bike file that is missing, or a
// span asked of an archive; core::JobError when the log holds no usable ride.
Ride load_ride(const RideOptions& options);

}  // namespace clickwise::workflow
