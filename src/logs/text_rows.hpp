// A text log opened: its format, and columns of it.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "clickwise/io/delimited.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "clickwise/logs/clock.hpp"
#include "clickwise/logs/sniff.hpp"

namespace clickwise::logs {

// Magnitudes from here on are no readings: no converter writes them, and sums of their squares
// would overflow.
inline constexpr double largest_reading = 1e100;

class TextRows {
public:
  explicit TextRows(const std::string& path);

  const std::string& path() const { return path_; }
  const TextFormat& format() const { return format_; }
  std::size_t text_bytes() const { return file_.text().size(); }

  // Sentences on what was guessed about the format.
  std::vector<std::string> notes() const;

  // Of the first row that fills the column, among the first 64; empty if none does.
  std::string first_cell(std::size_t column) const;

  // Numbers, or time stamps where the first cell is one.
  io::CellKind kind_of(std::size_t column) const;

  // Readings beyond largest_reading are made NaN and counted as unreadable. Time stamps count from
  // midnight of the first.
  io::Columns read(const std::vector<io::WantedColumn>& wanted, bool rows_are_the_clock,
                   std::size_t chunk_bytes = 0) const;

  // The last column of `columns` as the stamps of a clock; takes them out of it.
  ClockReadings clock_readings(io::Columns& columns, std::size_t column, double seconds_per_tick,
                               bool time_of_day) const;

  // Throw core::InputError.
  void refuse_words(const io::Column& column, std::size_t index) const;
  void refuse_mostly_malformed(const io::Columns& columns) const;

private:
  std::string path_;
  io::MappedFile file_;
  TextFormat format_;
};

}  // namespace clickwise::logs
