#include "clickwise/logs/facts.hpp"

#include <algorithm>
#include <cmath>
#include <filesystem>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/utf8.hpp"
#include "clickwise/io/timestamp.hpp"
#include "clickwise/logs/clock.hpp"
#include "column_facts.hpp"
#include "guess_time.hpp"
#include "text_rows.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t group_bytes = std::size_t{1} << 28U;
constexpr std::size_t likely_bytes_per_row = 4;  // the least that two columns take

// Describes the columns in groups, so that a log of many columns does not fill the memory.
std::vector<Advance> describe_columns(LogFacts& facts, const TextRows& rows,
                                      std::size_t text_bytes) {
  const std::size_t columns = rows.format().layout.columns;
  std::vector<Advance> advances(columns);
  facts.columns.resize(columns);
  const std::size_t bytes = 8 * (text_bytes / std::max(likely_bytes_per_row, 2 * columns) + 1);
  const std::size_t group = std::clamp<std::size_t>(group_bytes / bytes, 1, columns);
  for (std::size_t begin = 0; begin < columns; begin += group) {
    std::vector<io::WantedColumn> wanted;
    for (std::size_t k = begin; k < std::min(begin + group, columns); ++k)
      wanted.push_back({k, rows.kind_of(k)});
    const io::Columns read = rows.read(wanted, false);
    if (begin == 0) {
      rows.refuse_mostly_malformed(read);
      facts.rows = read.whole_rows;
      facts.malformed_rows = read.malformed_rows();
      facts.truncated = read.truncated;
    }
    core::parallel_for(wanted.size(), [&](std::size_t k) {
      ColumnFacts& column = facts.columns[begin + k];
      column = describe(read.columns[k], wanted[k].kind, advances[begin + k]);
      column.name = rows.format().names[begin + k];
      column.number = static_cast<int>(begin + k + 1);
      column.example = core::as_utf8(rows.first_cell(begin + k));
    });
  }
  return advances;
}

std::optional<TimeGuess> told_time(const TextRows& rows, const bike::LogFormat& format) {
  if (!format.time) return std::nullopt;
  TimeGuess told;
  told.column = find_column(rows.format(), format.time->column, rows.path());
  told.seconds_per_unit = format.time->seconds_per_unit;
  told.unit = told.seconds_per_unit == 1.0 ? "s" : told.seconds_per_unit == 1e-3 ? "ms" : "us";
  if (rows.kind_of(told.column) == io::CellKind::timestamp) {
    told.unit = "date";
    told.seconds_per_unit = 1.0;
  }
  return told;
}

double lay_time(LogFacts& facts, const TextRows& rows, const TimeGuess& time) {
  const io::CellKind kind = rows.kind_of(time.column);
  io::Columns read = rows.read({{time.column, kind}}, false);
  try {
    const Clock clock =
        lay_clock(rows.clock_readings(read, time.column, time.seconds_per_unit,
                                      io::is_time_of_day(rows.first_cell(time.column))),
                  rows.path());
    describe_clock(facts, clock);
    return clock.malformed_s;
  } catch (const core::JobError& error) {
    facts.notes.emplace_back(error.what());
    return 0.0;
  }
}

}  // namespace

LogFacts inspect_text_log(const std::string& path, const bike::LogFormat* format) {
  const TextRows rows(path);
  LogFacts facts;
  facts.name = core::as_utf8(std::filesystem::path(path).filename().string());
  facts.notes = rows.notes();
  const std::vector<Advance> advances = describe_columns(facts, rows, rows.text_bytes());
  facts.format = rows.format();
  facts.format.layout.header = facts.format.layout.units = {};
  facts.time = format ? told_time(rows, *format) : guess_time(facts.columns, advances);
  double malformed_s = 0.0;
  if (facts.time) {
    malformed_s = lay_time(facts, rows, *facts.time);
  } else if (format && format->rate_hz) {
    facts.rate_hz = *format->rate_hz;
    facts.duration_s = static_cast<double>(facts.rows) / facts.rate_hz;
  }
  facts.faults.add(run::FaultKind::missing, "", static_cast<long long>(facts.malformed_rows),
                   malformed_s);
  facts.faults.add(run::FaultKind::truncated, "", facts.truncated,
                   facts.rate_hz > 0.0 ? 1.0 / facts.rate_hz : 0.0);
  return facts;
}

}  // namespace clickwise::logs
