#include "clickwise/logs/text_log.hpp"

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/utf8.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "clickwise/io/timestamp.hpp"
#include "clickwise/logs/clock.hpp"
#include "clickwise/logs/sniff.hpp"
#include "text_rows.hpp"

namespace clickwise::logs {

namespace {

struct Request {
  std::vector<io::WantedColumn> wanted;  // the time column last, if there is one
  bool time_of_day = false;
};

Request make_request(const TextRows& rows, const bike::LogFormat& format,
                     const std::vector<bike::ColumnRef>& columns) {
  Request request;
  for (const bike::ColumnRef& column : columns)
    request.wanted.push_back({find_column(rows.format(), column, rows.path())});
  if (!format.time) return request;
  const std::size_t index = find_column(rows.format(), format.time->column, rows.path());
  const std::string cell = rows.first_cell(index);
  request.wanted.push_back({index, rows.kind_of(index)});
  request.time_of_day = io::is_time_of_day(cell);
  return request;
}

void add_channels(run::Recording& recording, const TextRows& rows, const Request& request,
                  io::Columns& columns, const std::vector<Dropped>& dropped, std::size_t count) {
  for (std::size_t k = 0; k < count; ++k) {
    io::Column& column = columns.columns[k];
    const std::size_t index = request.wanted[k].index;
    rows.refuse_words(column, index);
    run::Channel channel{column_label(rows.format(), index),
                         kept_readings(std::move(column.values), dropped)};
    const auto unread = std::count_if(channel.readings.begin(), channel.readings.end(),
                                      [](double reading) { return std::isnan(reading); });
    const auto missing =
        static_cast<long long>(unread) - static_cast<long long>(columns.rows - columns.whole_rows);
    recording.faults.add(run::FaultKind::missing, channel.name, missing,
                         static_cast<double>(missing) * recording.interval_s);
    recording.channels.push_back(std::move(channel));
  }
}

}  // namespace

run::Recording read_text_log(const std::string& path, const bike::LogFormat& format,
                             const std::vector<bike::ColumnRef>& columns,
                             const TextLogOptions& options) {
  const TextRows rows(path);
  const Request request = make_request(rows, format, columns);
  io::Columns read = rows.read(request.wanted, !format.time, options.chunk_bytes);
  rows.refuse_mostly_malformed(read);
  run::Recording recording;
  recording.name = core::as_utf8(std::filesystem::path(path).filename().string());
  recording.notes = rows.notes();

  Clock clock;
  if (format.time) {
    io::Column& stamps = read.columns.back();
    rows.refuse_words(stamps, request.wanted.back().index);
    const bool is_number = request.wanted.back().kind == io::CellKind::number;
    clock = lay_clock(
        rows.clock_readings(read, request.wanted.back().index,
                            is_number ? format.time->seconds_per_unit : 1.0, request.time_of_day),
        path);
  } else {
    clock = uniform_clock(read.rows, *format.rate_hz, read.header_repeats);
    clock.malformed_s = static_cast<double>(read.malformed_rows()) * clock.interval_s;
    if (read.rows < 3)
      throw core::JobError({path},
                           "the log has too few samples (" + std::to_string(read.rows) + ")",
                           "check that the log is whole");
  }
  recording.interval_s = clock.interval_s;
  add_channels(recording, rows, request, read, clock.dropped, columns.size());
  recording.t_s = std::move(clock.t_s);
  recording.stretches = std::move(clock.stretches);
  recording.faults.merge(clock.faults);
  recording.faults.add(run::FaultKind::missing, "", static_cast<long long>(read.malformed_rows()),
                       clock.malformed_s);
  recording.faults.add(run::FaultKind::truncated, "", read.truncated, clock.interval_s);
  recording.notes.insert(recording.notes.end(), clock.notes.begin(), clock.notes.end());
  return recording;
}

}  // namespace clickwise::logs
