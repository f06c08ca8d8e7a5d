// Where a clock does not run on, and why. The rules are in logs/clock.hpp.
#pragma once

#include <cstddef>
#include <vector>

namespace clickwise::logs {

// Rows lost in front of a sample, by reason.
struct Lost {
  std::size_t sample = 0;
  std::size_t malformed = 0;
  std::size_t stamps = 0;
};

struct Break {
  std::size_t sample = 0;
  double shift_s = 0.0;      // to be taken off all later stamps
  double gap_s = 0.0;        // time lost that no row accounts for
  double malformed_s = 0.0;  // time lost with malformed rows
  double stamps_s = 0.0;     // time lost with unreadable stamps
  bool restart = false;
};

struct Findings {
  std::vector<Break> breaks;
  std::vector<std::size_t> twice;  // rows written twice
  std::vector<std::size_t> close;  // other samples close behind the one before
};

// What is known besides the stamps (s); both in order.
struct ClockMarks {
  std::vector<std::size_t> reboots;
  std::vector<Lost> lost;
};

// `grid_s` is what the stamps are rounded to; 0 if not known.
Findings find_breaks(const std::vector<double>& stamps, const ClockMarks& marks, double interval_s,
                     double grid_s);

// Mean step over the stretches between the breaks; `otherwise` where there is none.
double mean_clean_step(const std::vector<double>& stamps, const Findings& findings,
                       double otherwise);

// Of `close_or_twice` samples (in order), those within `reach_s` of the sample that their run
// follows.
std::vector<std::size_t> samples_to_merge(const std::vector<double>& stamps,
                                          const std::vector<std::size_t>& close_or_twice,
                                          double reach_s);

}  // namespace clickwise::logs
