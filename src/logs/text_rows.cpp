#include "text_rows.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/utf8.hpp"
#include "clickwise/io/number.hpp"
#include "clickwise/io/timestamp.hpp"
#include "sample_rows.hpp"

namespace clickwise::logs {

namespace {

// Words that loggers write where a sensor gave nothing: the cells are missing, the column is right.
bool stands_for_no_reading(std::string_view cell) {
  constexpr std::array<std::string_view, 7> words{"nan",  "-nan", "inf", "-inf",
                                                  "null", "na",   "n/a"};
  std::string lower;
  for (const char c : trimmed(cell)) lower += static_cast<char>(c >= 'A' && c <= 'Z' ? c + 32 : c);
  return std::find(words.begin(), words.end(), lower) != words.end();
}

constexpr double day_s = 86400.0;

void refuse_too_large(io::Column& column) {
  for (double& value : column.values) {
    if (!(std::abs(value) >= largest_reading)) continue;
    value = std::numeric_limits<double>::quiet_NaN();
    ++column.unreadable_cells;
  }
}

}  // namespace

TextRows::TextRows(const std::string& path)
    : path_(path), file_(path), format_(sniff_text_log(file_.text(), path)) {}

std::vector<std::string> TextRows::notes() const {
  std::vector<std::string> notes;
  if (format_.preamble_lines > 0)
    notes.push_back(std::to_string(format_.preamble_lines) +
                    " lines in front of the data are neither header nor comment; they are skipped");
  if (!format_.units_row.empty())
    notes.push_back("the line \"" + core::as_utf8(format_.units_row) +
                    "\" is taken for the columns' units");
  if (format_.header_in_comment)
    notes.push_back("the names of the columns are taken from the last comment line");
  return notes;
}

std::string TextRows::first_cell(std::size_t column) const {
  const std::string_view text = file_.text();
  std::size_t begin = format_.layout.data_begin;
  for (int rows = 0; begin < text.size() && rows < 64; ++rows) {
    const io::Record record = io::read_record(text, begin, format_.layout.delimiter);
    begin = record.end;
    if (record.cells.size() != format_.layout.columns) continue;
    const std::string_view cell = trimmed(record.cells[column]);
    if (!cell.empty()) return std::string(cell);
  }
  return {};
}

io::CellKind TextRows::kind_of(std::size_t column) const {
  const std::string cell = first_cell(column);
  const bool number = !std::isnan(io::parse_number(cell, format_.layout.point));
  return !number && !std::isnan(io::parse_timestamp(cell)) ? io::CellKind::timestamp
                                                           : io::CellKind::number;
}

io::Columns TextRows::read(const std::vector<io::WantedColumn>& wanted, bool rows_are_the_clock,
                           std::size_t chunk_bytes) const {
  double epoch_s = 0.0;
  for (const io::WantedColumn& column : wanted)
    if (column.kind == io::CellKind::timestamp)
      epoch_s = std::floor(io::parse_timestamp(first_cell(column.index)) / day_s) * day_s;
  const io::ColumnsOptions options{chunk_bytes, rows_are_the_clock, epoch_s};
  io::Columns columns = io::read_columns(file_.text(), format_.layout, wanted, options);
  core::parallel_for(wanted.size(), [&](std::size_t k) { refuse_too_large(columns.columns[k]); });
  return columns;
}

ClockReadings TextRows::clock_readings(io::Columns& columns, std::size_t column,
                                       double seconds_per_tick, bool time_of_day) const {
  ClockReadings readings;
  readings.ticks = std::move(columns.columns.back().values);
  readings.seconds_per_tick = seconds_per_tick;
  readings.time_of_day = time_of_day;
  readings.column = column_label(format_, column);
  for (const io::MalformedRows& run : columns.malformed)
    readings.lost.push_back({run.row, run.count});
  readings.reboots = columns.header_repeats;
  return readings;
}

void TextRows::refuse_words(const io::Column& column, std::size_t index) const {
  if (column.unreadable_example.empty() || stands_for_no_reading(column.unreadable_example)) return;
  const bool has_number = std::any_of(column.values.begin(), column.values.end(),
                                      [](double value) { return !std::isnan(value); });
  if (has_number) return;
  throw core::InputError({path_, static_cast<int>(format_.data_line)},
                         "the column \"" + column_label(format_, index) +
                             "\" holds no numbers but words such as \"" +
                             column.unreadable_example + '"',
                         "name a column of numbers in the bike file");
}

void TextRows::refuse_mostly_malformed(const io::Columns& columns) const {
  const std::size_t bad = columns.malformed_rows();
  const std::size_t good = columns.whole_rows;
  if (bad * 2 <= good + bad) return;
  throw core::InputError({path_, static_cast<int>(format_.data_line)},
                         std::to_string(bad) + " of " + std::to_string(good + bad) +
                             " rows do not have " + std::to_string(format_.layout.columns) +
                             " cells as the first rows have",
                         "check how the log is delimited");
}

}  // namespace clickwise::logs
