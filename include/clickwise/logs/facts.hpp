// What a log holds, told without a bike file or with one.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/logs/sniff.hpp"
#include "clickwise/run/fault.hpp"

namespace clickwise::logs {

enum class ColumnKind { number, constant, timestamp, text, empty };

std::string_view to_string(ColumnKind kind);

struct ColumnFacts {
  std::string name;  // as in the header; empty without one
  int number = 1;    // counted from 1
  ColumnKind kind = ColumnKind::empty;
  std::size_t count = 0;    // cells that are numbers (time stamps in a column of those)
  std::size_t missing = 0;  // cells that are empty or unreadable
  double least = 0.0;       // of the numbers; 0 where there are none
  double most = 0.0;
  double resolution = 0.0;  // the step that all readings are multiples of; 0: none found
  double mean = 0.0;        // of the numbers, and their standard deviation
  double deviation = 0.0;
  std::string example;  // the first cell that is filled
  std::string units;    // as the file tells them; empty: it does not
};

// The column that is most likely the time.
struct TimeGuess {
  std::size_t column = 0;         // counted from 0
  std::string unit;               // "s", "ms", "us", or "date" for time stamps
  double seconds_per_unit = 1.0;  // 1 for time stamps
  bool by_name = false;           // its name says so; otherwise only that it increases steadily
  bool unit_by_name = false;      // the name gives the unit; otherwise it is the one that gives the
                                  // likeliest rate
};

struct LogFacts {
  std::string name;                   // the file's, without its folder
  TextFormat format;                  // its views into the text are empty
  std::string hdf5_group;             // of the columns; empty: no HDF5
  std::string binary_format;          // what a log is that is no text; empty for text
  std::vector<std::string> contents;  // groups and data sets of an HDF5 file, a line each
  std::vector<ColumnFacts> columns;
  std::size_t rows = 0;
  std::size_t malformed_rows = 0;
  bool truncated = false;
  std::optional<TimeGuess> time;  // none: no column fits
  double duration_s = 0.0;        // first stamp to last; all of these 0 without a time
  double rate_hz = 0.0;
  double clock_resolution_s = 0.0;
  double longest_gap_s = 0.0;
  long long wraps = 0;
  long long repeated_stamps = 0;
  run::FaultLedger faults;  // gap, time_restart, missing (of time and rows), truncated
  std::vector<std::string> notes;
};

// Of a log of any kind. With `format` its kind, and its time column or rate, are taken from there;
// without, it may be text or HDF5, of which the group with the most channels is taken. Throws
// core::InputError as read_log does; a column that turns out to be no clock is only noted.
LogFacts inspect_log(const std::string& path, const bike::LogFormat* format = nullptr);

// Of a text log. Reads every column, in groups that keep the memory below some 256 MiB beside the
// mapped file. With `format`, its time column or rate is taken instead of a guess. Throws
// core::InputError as read_text_log does; a column that turns out to be no clock is only noted.
LogFacts inspect_text_log(const std::string& path, const bike::LogFormat* format = nullptr);

}  // namespace clickwise::logs
