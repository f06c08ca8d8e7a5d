// A starter bike file for a log that has none, for the user to complete.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::bike {

// A numeric column of the log and the range of its readings.
struct StarterColumn {
  ColumnRef column;
  double least = 0.0;
  double most = 0.0;
  int converter_bits = 0;  // of the converter that it could be counts of; 0: no counts
};

// Three columns that look like one sensor of an IMU.
struct StarterImu {
  bool accelerometer = true;  // otherwise a gyro
  std::array<ColumnRef, 3> columns;
  std::string unit;   // g, m/s2, deg/s, rad/s, or "?"
  double size = 0.0;  // length of the mean vector
};

// What is known from the log alone.
struct StarterFacts {
  std::string log_name;
  std::optional<ColumnRef> time;
  std::string time_unit = "s";            // s, ms or us
  std::optional<ColumnRef> speed;         // wheel speed
  std::string speed_unit = "km/h";        // m/s or km/h
  std::string hdf5_group;                 // that holds the columns; empty: a text log
  std::vector<StarterImu> imus;           // in the order of the log
  std::vector<StarterColumn> candidates;  // columns that could be travel, likeliest first
};

// Text of a bike file. What only the user can know is the text "?", told in a comment beside it;
// once every "?" is replaced by a number the file reads, and until then the reader refuses the
// first one left. Columns named after a fork or a front go to [front], after a shock or a rear to
// [rear]; otherwise the first two in order. Without a candidate, [front] asks for its column too.
// Sensors of IMUs are offered as an IMU pair in comments, the first accelerometer and gyro as the
// upper unit.
std::string starter_bike(const StarterFacts& facts);

}  // namespace clickwise::bike
