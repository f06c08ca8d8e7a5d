// A logger that never was: from the truth to the readings and the text it would have written.
#pragma once

#include <cstdint>
#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/run/fault.hpp"
#include "clickwise/sim/ride.hpp"

namespace clickwise::sim {

// Damage done on purpose. Times count from the log's first sample.
struct PlannedFault {
  run::FaultKind kind = run::FaultKind::gap;
  double at_s = 0.0;
  double seconds = 0.0;      // of gap, stuck, saturated, missing
  std::string channel = {};  // a column of the log; empty for gap, time_restart, truncated
  double counts = 1500.0;    // height of a spike; its sign is kept, the converter's range clips it
};

// What the accelerometers on the sprung sides do to what they feel.
struct SprungAccelPlan {
  double noise_g = 0.0;  // one standard deviation of a reading
  double bias_g = 0.0;
  double range_g = 64.0;  // readings are clipped to it, either way
  int decimals = 4;       // of the readings, in the bike file's unit
};

// The inertial units of the log.
struct ImuPlan {
  double noise_ug_sqrt_hz = 150.0;  // one-sided density; IEEE Std 952-1997
  double gyro_noise_deg_s_sqrt_hz = 0.005;
  double bias_mg = 0.0;  // of every axis, either way
  double gyro_bias_deg_s = 0.0;
  double range_g = 16.0;  // clipped beyond it
  double gyro_range_deg_s = 2000.0;
  double mounting_deg = 0.0;     // each unit is turned by it about an axis of its own
  double rate_hz = 0.0;          // 0: the logger's; slower: cells between stay empty
  double lag_ms = 0.0;           // the units' samples are so much older than their row
  double lower_drift_ppm = 0.0;  // of the lower units' clock
  int decimals = 4;              // in the bike file's unit
};

struct LoggerPlan {
  double rate_hz = 1000.0;
  int adc_bits = 12;
  double noise_counts = 0.0;  // one standard deviation, before rounding
  double jitter = 0.0;        // of a period: samples fall within +- this much of their turn
  int time_decimals = 0;      // of the stamps, in the bike file's time unit
  double clock_start = 0.0;   // first stamp, in that unit
  bool wrap_u32 = false;      // stamps are taken modulo 2^32 of that unit
  SprungAccelPlan sprung_accel;
  std::vector<std::string> extra_columns;  // further readings that nobody asked for: slow noise
  int extra_decimals = 0;                  // of the further readings
  ImuPlan imu;
  std::vector<PlannedFault> faults;
  std::uint64_t seed = 1;
};

// Writes the log of the ride as comma-separated text with a header (none where the bike file names
// every column by number), piece by piece into `sink`. Columns: the bike file's time, sensors,
// speed and accelerometers of the sprung sides, then the extra ones. Readings are the calibration
// turned round, with noise, rounded, and clipped to the converter's range; the truth is read
// between its samples by its own velocity. Throws core::JobError when a fault names a channel that
// the log does not have, or the columns cannot be laid out.
void write_log(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
               const std::function<void(std::string_view)>& sink);

// The sensor's calibration turned round: readings over travel in m, straight on beyond its ends.
core::Polyline readings_over_travel(const bike::Potentiometer& sensor);

}  // namespace clickwise::sim
