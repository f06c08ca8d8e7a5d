// From a logger's time stamps to a clock that can be trusted: wraps undone, restarts joined, gaps
// and what else was lost found and counted.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "clickwise/run/recording.hpp"

namespace clickwise::logs {

// Rows that were lost (malformed) in front of sample `sample`.
struct LostRows {
  std::size_t sample = 0;
  std::size_t count = 0;
};

struct ClockReadings {
  std::vector<double> ticks;  // one per sample, in the logger's unit; NaN where unreadable
  double seconds_per_tick = 1.0;
  bool time_of_day = false;          // the stamps begin again at midnight
  std::string column;                // the time column's label, for faults and messages
  std::vector<LostRows> lost;        // in order
  std::vector<std::size_t> reboots;  // samples in front of which the logger wrote its header anew
};

// A sample that is not in the clock: left out, or made one with the sample before it.
struct Dropped {
  std::size_t sample = 0;
  bool merged = false;
};

struct Clock {
  std::vector<double> t_s;              // of the samples kept: from 0, strictly increasing
  std::vector<run::Stretch> stretches;  // in order, covering every sample kept
  double interval_s = 0.0;
  std::vector<Dropped> dropped;  // in order, in the numbering of ClockReadings
  run::FaultLedger faults;       // gap, time_restart, missing (the time column's)
  std::vector<std::string> notes;
  double malformed_s = 0.0;       // time lost with the malformed rows
  long long wraps = 0;            // overflows of the logger's counter, undone
  long long repeated_stamps = 0;  // stamps equal to the one before
  double longest_gap_s = 0.0;
  double resolution_s = 0.0;  // the grid that the stamps lie on; 0: none found
};

// With c the sample interval and φ_i = t_i - i c the phase of a stamp:
//  - c is the mean step over the stretches without faults, the sum of (t_end - t_begin) by the sum
//    of their steps: rounding of stamps costs it at most one grid step in a whole stretch;
//  - a step above 1.5 c is a gap if the median phase of the 8 stamps behind it is more than c / 2
//    above that of the 8 in front of it (time was lost for good); otherwise it is jitter, made up
//    for by its neighbours. A gap lasts step - c, since each sample stands for one interval;
//  - a step back is a counter's overflow (2^16 or 2^32 ticks, 2^32 us, midnight) if adding that
//    makes it a step of at most 8 c (2^16) or of 1/64 of the period (the others); otherwise it is a
//    restart, behind which time goes on one interval after the last sample, as it does behind a
//    step of more than a day (the clock was set);
//  - up to 3 stamps that leave the line and return to it are unreadable stamps (missing);
//  - a stamp closer than c / 10 to the one before is a row written twice if the phase falls by more
//    than c / 2 for good. Such rows, and close stamps on a grid finer than c / 4, are merged with
//    the row before and counted as missing with no seconds; on a coarser grid equal stamps are
//    rounded ones, no fault, and are spread evenly up to the next;
//  - on such a coarse grid, three or more gaps and rows written twice that leave all stamps within
//    1.25 grid steps of a line are a clock that drifts against the grid, no faults; one or two are
//    taken as faults, though drift could explain them too;
//  - stamps on a grid coarser than c / 100 that keep within 3/4 of a grid step of a straight line
//    are that line, rounded: the line is taken.
// Rows lost between two samples break a stretch where their time was lost too: their seconds are
// the smaller of c each and step - c in all. O(n).
// Throws core::JobError naming `path`: fewer than 3 readable stamps, or stamps that do not advance.
Clock lay_clock(ClockReadings readings, const std::string& path);

// The clock of a log without a time column: sample i at i / rate_hz; breaks where the logger
// restarted.
Clock uniform_clock(std::size_t samples, double rate_hz, const std::vector<std::size_t>& reboots);

// Applies clock.dropped to a channel: merged samples become the mean of those that can be read.
std::vector<double> kept_readings(std::vector<double> readings,
                                  const std::vector<Dropped>& dropped);

}  // namespace clickwise::logs
