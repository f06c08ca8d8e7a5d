// What the steps between time stamps tell, piece by piece; the whole is in logs/clock.hpp.
#pragma once

#include <cstddef>
#include <vector>

namespace clickwise::logs {

// Median of (t_(i+lag) - t_i) / lag over windows spread over the log; the lag is long enough for
// rounding of the stamps not to matter. 0 where the stamps do not advance.
double rough_interval(const std::vector<double>& stamps);

// The grid of up to 4096 of the stamps, decimal_grid.hpp.
double stamp_grid(const std::vector<double>& stamps);

// Adds the period of a counter that overflowed to the stamps behind; returns how often.
long long undo_wraps(std::vector<double>& ticks, double seconds_per_tick, bool time_of_day,
                     double rough_ticks);

// Stamps, at most 3 in a row, that leave the line of their neighbours and come back to it.
// `barriers` are samples in front of which the logger restarted.
std::vector<std::size_t> stray_stamps(const std::vector<double>& stamps, double interval,
                                      const std::vector<std::size_t>& barriers);

// Spreads runs of equal stamps evenly up to the next stamp, at most over `span`.
void spread_equal_stamps(std::vector<double>& stamps, std::size_t begin, std::size_t end,
                         double interval, double span);

// Median phase of up to 8 stamps from `at` on less that of up to 8 in front of it, not in front of
// `begin`, nor over steps back or of more than 4 intervals.
double phase_change(const std::vector<double>& stamps, std::size_t at, std::size_t begin,
                    double interval);

// The straight line through the stamps of [begin, end) by least squares, moved to the middle of
// what they stray from it.
struct StampLine {
  double start = 0.0;
  double step = 0.0;
  double range = 0.0;  // largest less smallest distance of a stamp from it
};
StampLine fit_line(const std::vector<double>& stamps, std::size_t begin, std::size_t end);

}  // namespace clickwise::logs
