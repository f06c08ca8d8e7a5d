#include <algorithm>
#include <array>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

constexpr std::array<std::string_view, 10> type_names{"u8",  "i8",  "u16", "i16", "u32",
                                                      "i32", "u64", "i64", "f32", "f64"};
constexpr std::size_t most_frame_bytes = 4096;
constexpr long long most_header_bytes = 1LL << 30U;
constexpr const char* frame_example = "frame = [[\"t_us\", \"u32\"], [\"fork_adc\", \"u16\"]]";

PackedField read_field(const io::TomlValue& value) {
  const std::string example = std::string("write the frame as ") + frame_example;
  if (value.kind() != io::TomlKind::array || value.items().size() != 2)
    value.refuse("must be a field's name and its type", example);
  const std::string type = value.items()[1].choice({type_names.begin(), type_names.end()});
  const auto found = std::find(type_names.begin(), type_names.end(), type);
  return {value.items()[0].text(), static_cast<FieldType>(found - type_names.begin())};
}

PackedFrames read_packed(const io::TomlTable& table) {
  PackedFrames packed;
  packed.big_endian = table.choice("endian", {"little", "big"}) == "big";
  packed.header_bytes =
      static_cast<std::size_t>(table.integer("header_bytes", 0, most_header_bytes).value_or(0));
  const io::TomlValue frame = table.need("frame", frame_example);
  if (frame.kind() != io::TomlKind::array || frame.items().empty())
    frame.refuse("must list the fields of a frame",
                 std::string("write for example ") + frame_example);
  for (const io::TomlValue& item : frame.items()) packed.frame.push_back(read_field(item));
  for (std::size_t i = 0; i < packed.frame.size(); ++i)
    for (std::size_t k = 0; k < i; ++k)
      if (packed.frame[i].name == packed.frame[k].name)
        frame.items()[i].refuse("the frame has a field of this name already",
                                "give each field a name of its own, as pad_1, pad_2 for filling");
  if (packed.frame_bytes() > most_frame_bytes)
    frame.refuse("the frame is longer than 4096 bytes", "check the list of fields");
  return packed;
}

void read_kind(const io::TomlTable& log, LogFormat& format) {
  if (const auto packed = log.table("packed")) format.packed = read_packed(*packed);
  if (const auto hdf5 = log.table("hdf5")) format.hdf5_group = hdf5->need_text("group", "/ride");
  if (format.hdf5_group && !format.hdf5_group->starts_with('/'))
    format.hdf5_group = "/" + *format.hdf5_group;
  if (format.packed && format.hdf5_group)
    log.find("hdf5")->refuse("the log is told to be packed frames as well",
                             "keep log.packed, or log.hdf5, not both");
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
  if (column.kind() == io::TomlKind::integer)
    return {"", static_cast<int>(column.integer(1, most_columns))};
  column.refuse("must be a header's name in quotes, or a column's number counted from 1",
                "write for example column = \"fork_adc\" or column = 2");
}

LogFormat read_log(const io::TomlTable& root) {
  const io::TomlTable log =
      root.need_table("log", "[log] with time = { column = \"t_us\", unit = \"us\" }");
  LogFormat format;
  read_kind(log, format);
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
