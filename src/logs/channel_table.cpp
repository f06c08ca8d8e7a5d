#include "channel_table.hpp"

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/utf8.hpp"
#include "column_facts.hpp"
#include "text_rows.hpp"

namespace clickwise::logs {

namespace {

TextFormat as_format(const ChannelTable& table) {
  TextFormat format;
  format.names = table.names;
  format.layout.columns = table.names.size();
  format.has_header = true;
  format.data_line = 0;
  return format;
}

std::string name_of(const std::string& path) {
  return core::as_utf8(std::filesystem::path(path).filename().string());
}

// What is no finite reading becomes NaN, as in text logs.
std::vector<double> readings(const ChannelTable& table, std::size_t channel) {
  std::vector<double> values = table.read(channel);
  for (double& value : values)
    if (!(std::abs(value) < largest_reading)) value = std::numeric_limits<double>::quiet_NaN();
  return values;
}

ClockReadings stamps_of(const ChannelTable& table, std::size_t channel, double seconds_per_tick) {
  ClockReadings stamps;
  stamps.ticks = readings(table, channel);
  stamps.seconds_per_tick = seconds_per_tick;
  stamps.column = table.names[channel];
  return stamps;
}

void refuse_few(const ChannelTable& table) {
  if (table.rows < 3)
    throw core::JobError({table.path},
                         "the log has " + std::to_string(table.rows) + " samples, too few",
                         "check that the log is whole");
}

void add_channel(run::Recording& recording, const std::string& name, std::vector<double> values,
                 const Clock& clock) {
  run::Channel channel{name, kept_readings(std::move(values), clock.dropped)};
  const auto missing = std::count_if(channel.readings.begin(), channel.readings.end(),
                                     [](double reading) { return std::isnan(reading); });
  recording.faults.add(run::FaultKind::missing, name, missing,
                       static_cast<double>(missing) * clock.interval_s);
  recording.channels.push_back(std::move(channel));
}

std::optional<TimeGuess> told_time(const ChannelTable& table, const bike::LogFormat& format) {
  if (!format.time) return std::nullopt;
  TimeGuess told;
  told.column = find_channel(table, format.time->column);
  told.seconds_per_unit = format.time->seconds_per_unit;
  told.unit = told.seconds_per_unit == 1.0 ? "s" : told.seconds_per_unit == 1e-3 ? "ms" : "us";
  return told;
}

std::vector<Advance> describe_columns(LogFacts& facts, const ChannelTable& table) {
  std::vector<Advance> advances(table.names.size());
  facts.columns.resize(table.names.size());
  core::parallel_for(table.names.size(), [&](std::size_t k) {
    const io::Column column{readings(table, k), 0, 0, {}};
    facts.columns[k] = describe(column, io::CellKind::number, advances[k]);
    facts.columns[k].name = table.names[k];
    facts.columns[k].number = static_cast<int>(k + 1);
    facts.columns[k].units = table.units[k];
  });
  return advances;
}

}  // namespace

std::size_t find_channel(const ChannelTable& table, const bike::ColumnRef& column) {
  return find_column(as_format(table), column, table.path);
}

run::Recording recording_of(const ChannelTable& table, const bike::LogFormat& format,
                            const std::vector<bike::ColumnRef>& columns) {
  refuse_few(table);
  std::vector<std::size_t> wanted;
  for (const bike::ColumnRef& column : columns) wanted.push_back(find_channel(table, column));
  std::vector<std::vector<double>> values(wanted.size());
  core::parallel_for(wanted.size(), [&](std::size_t k) { values[k] = readings(table, wanted[k]); });

  Clock clock = format.time ? lay_clock(stamps_of(table, find_channel(table, format.time->column),
                                                  format.time->seconds_per_unit),
                                        table.path)
                            : uniform_clock(table.rows, *format.rate_hz, {});
  run::Recording recording;
  recording.name = name_of(table.path);
  recording.notes = table.notes;
  recording.interval_s = clock.interval_s;
  for (std::size_t k = 0; k < wanted.size(); ++k)
    add_channel(recording, table.names[wanted[k]], std::move(values[k]), clock);
  recording.t_s = std::move(clock.t_s);
  recording.stretches = std::move(clock.stretches);
  recording.faults.merge(clock.faults);
  recording.faults.add(run::FaultKind::truncated, "", table.truncated, clock.interval_s);
  recording.notes.insert(recording.notes.end(), clock.notes.begin(), clock.notes.end());
  return recording;
}

LogFacts facts_of(const ChannelTable& table, const bike::LogFormat* format) {
  LogFacts facts;
  facts.name = name_of(table.path);
  facts.binary_format = table.written;
  facts.contents = table.contents;
  facts.hdf5_group = table.hdf5_group;
  facts.format = as_format(table);
  facts.notes = table.notes;
  facts.rows = table.rows;
  facts.truncated = table.truncated;
  const std::vector<Advance> advances = describe_columns(facts, table);
  facts.time = format ? told_time(table, *format) : guess_time(facts.columns, advances);
  if (facts.time) {
    try {
      describe_clock(facts,
                     lay_clock(stamps_of(table, facts.time->column, facts.time->seconds_per_unit),
                               table.path));
    } catch (const core::JobError& error) {
      facts.notes.emplace_back(error.what());
    }
  } else if (format && format->rate_hz) {
    facts.rate_hz = *format->rate_hz;
    facts.duration_s = static_cast<double>(facts.rows) / facts.rate_hz;
  }
  facts.faults.add(run::FaultKind::truncated, "", facts.truncated,
                   facts.rate_hz > 0.0 ? 1.0 / facts.rate_hz : 0.0);
  return facts;
}

}  // namespace clickwise::logs
