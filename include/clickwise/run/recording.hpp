// What a log reader delivers: the clock and the readings of the channels that were asked for,
// as they were written, before any calibration.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "clickwise/run/fault.hpp"

namespace clickwise::run {

// A run of samples without a hole in the clock: [begin, end).
struct Stretch {
  std::size_t begin = 0;
  std::size_t end = 0;
};

struct Channel {
  std::string name;              // the column's header, or its number counted from 1
  std::vector<double> readings;  // one per sample; NaN where the cell was empty or no number
};

// Samples of one log. t_s, and every channel, have the same size.
struct Recording {
  std::string name;                 // the file's name without its folder
  std::vector<double> t_s;          // seconds from the first sample, strictly increasing; wraps
                                    // are undone, and after a restart time goes on one interval
                                    // behind the last sample
  std::vector<Stretch> stretches;   // the clock's unbroken runs, in order, covering every sample
  double interval_s = 0.0;          // robust mean step over the clean stretches
  std::vector<Channel> channels;    // in the order asked for
  FaultLedger faults;               // gap, time_restart, missing, truncated
  std::vector<std::string> notes;   // sentences for the user: what was guessed, what looked odd
};

}  // namespace clickwise::run
