#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

void refuse_unread_formats(const io::TomlTable& log) {
  for (const char* key : {"packed", "hdf5"}) {
    const auto value = log.find(key);
    if (!value) continue;
    throw core::InputError(value->place(),
                           value->name() + ": this log format is not read by this version",
                           "export the log as delimited text and remove this key");
  }
}

TimeColumn read_time(const io::TomlTable& time) {
  TimeColumn result;
  result.column = read_column(time);
  const std::string unit = time.need_choice("unit", {"s", "ms", "us"});
  if (unit == "ms") result.seconds_per_unit = core::seconds_per_ms;
  if (unit == "us") result.seconds_per_unit = core::seconds_per_us;
  return result;
}

SpeedColumn read_speed(const io::TomlTable& speed) {
  SpeedColumn result;
  result.column = read_column(speed);
  if (speed.need_choice("unit", {"m/s", "km/h"}) == "km/h")
    result.metres_per_second_per_unit = core::metres_per_second_per_km_h;
  return result;
}

}  // namespace

ColumnRef read_column(const io::TomlTable& table) {
  const io::TomlValue column = table.need("column", "column = \"name of the column\"");
  if (column.kind() == io::TomlKind::text) return {column.text(), 0};
  if (column.kind() == io::TomlKind::integer) {
    constexpr long long most_columns = 100000;
    return {"", static_cast<int>(column.integer(1, most_columns))};
  }
  column.refuse("must be a header's name in quotes, or a column's number counted from 1",
                "write for example column = \"fork_adc\" or column = 2");
}

LogFormat read_log(const io::TomlTable& root) {
  const io::TomlTable log =
      root.need_table("log", "[log] with time = { column = \"t_us\", unit = \"us\" }");
  refuse_unread_formats(log);
  LogFormat format;
  if (const auto time = log.table("time")) format.time = read_time(*time);
  format.rate_hz = log.number("rate_hz", {.least = 1.0, .most = 1e6, .example = 1000.0});
  if (const auto speed = log.table("speed")) format.speed = read_speed(*speed);
  if (format.time && format.rate_hz)
    log.find("rate_hz")->refuse("the log has a time column as well",
                                "keep log.time, or log.rate_hz, not both");
  if (!format.time && !format.rate_hz)
    log.refuse("the log's time is missing",
               "add for example time = { column = \"t_us\", unit = \"us\" }, or rate_hz = 1000 "
               "when the log has no time column");
  return format;
}

}  // namespace clickwise::bike
