// Which column of the invented log holds what.
#pragma once

#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/sim/logger.hpp"

namespace clickwise::sim {

enum class ColumnKind { time, front, rear, speed, front_accel, rear_accel, imu, hand, extra };

// Which reading of which unit; `component` is 0 to 2.
struct ImuColumn {
  bike::EndName end = bike::EndName::front;
  bool lower = false;
  bool gyro = false;
  std::size_t component = 0;
};

struct LogColumn {
  std::string name;
  ColumnKind kind = ColumnKind::extra;
  ImuColumn imu = {};  // of the kinds imu and hand
};

struct LogLayout {
  std::vector<LogColumn> columns;
  bool header = true;
};

// Numbered columns at their places, named ones in the free places before the extra ones; places
// that are left over hold extra readings called "spare". Throws core::JobError when two want one
// place.
LogLayout lay_out(const bike::Bike& bike, const LoggerPlan& plan);

}  // namespace clickwise::sim
