#include "clickwise/bike/starter.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cctype>

namespace clickwise::bike {

namespace {

std::string quoted(std::string_view text) {
  std::string out = "\"";
  for (const char c : text) {
    const auto byte = static_cast<unsigned char>(c);
    if (c == '"' || c == '\\')
      out += {'\\', c};
    else if (byte < 0x20 || byte == 0x7f)
      out += fmt::format("\\u{:04X}", byte);
    else
      out += c;
  }
  return out + "\"";
}

// For a comment, where a line break would end it.
std::string one_line(std::string_view text) {
  std::string out(text);
  std::replace_if(
      out.begin(), out.end(),
      [](char c) { return static_cast<unsigned char>(c) < 0x20 || c == 0x7f; }, ' ');
  return out;
}

std::string as_value(const ColumnRef& column) {
  return column.name.empty() ? fmt::format("{}", column.number) : quoted(column.name);
}

bool names_one_of(const ColumnRef& column, const std::array<std::string_view, 2>& words) {
  std::string lower = column.name;
  std::transform(lower.begin(), lower.end(), lower.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return std::any_of(words.begin(), words.end(),
                     [&](std::string_view word) { return lower.find(word) != std::string::npos; });
}

using Columns = std::vector<StarterColumn>;

// Takes the column that is named like this end out of the list.
std::optional<StarterColumn> take_named(Columns& columns, EndName end) {
  const std::array<std::string_view, 2> words{part(end), to_string(end)};
  const auto found = std::find_if(columns.begin(), columns.end(), [&](const StarterColumn& one) {
    return names_one_of(one.column, words);
  });
  if (found == columns.end()) return std::nullopt;
  const StarterColumn taken = *found;
  columns.erase(found);
  return taken;
}

std::optional<StarterColumn> take_first(Columns& columns) {
  if (columns.empty()) return std::nullopt;
  const StarterColumn taken = columns.front();
  columns.erase(columns.begin());
  return taken;
}

std::string log_table(const StarterFacts& facts) {
  std::string text = "[log]\n";
  if (facts.time)
    text += fmt::format("time = {{ column = {}, unit = {} }}   # check the unit: s, ms or us\n",
                        as_value(*facts.time), quoted(facts.time_unit));
  else
    text += "rate_hz = \"?\"   # samples per second: no time column was found\n";
  if (!facts.hdf5_group.empty())
    text += fmt::format("hdf5 = {{ group = {} }}\n", quoted(facts.hdf5_group));
  if (facts.speed)
    text += fmt::format("speed = {{ column = {}, unit = {} }}   # check the unit: m/s or km/h\n",
                        as_value(*facts.speed), quoted(facts.speed_unit));
  return text;
}

std::string counts_words(const StarterColumn& column) {
  if (column.converter_bits == 0) return "";
  return fmt::format(": counts of a converter of {} bits", column.converter_bits);
}

std::string end_table(EndName end, const std::optional<StarterColumn>& column) {
  const std::string_view name = to_string(end);
  std::string text = fmt::format(
      "\n[{0}]\nstroke_mm = \"?\"   # shaft travel of the {1} from full extension to metal, mm\n"
      "\n[{0}.sensor]\nkind = \"potentiometer\"\n",
      name, part(end));
  if (column)
    text += fmt::format("column = {}   # reads {} to {} in this log{}\n", as_value(column->column),
                        column->least, column->most, counts_words(*column));
  else
    text += "column = \"?\"   # header or number of the column that holds the sensor's reading\n";
  text += fmt::format(
      "# Take the {0}'s air or spring out. Extend it fully, take the reading; compress it fully,\n"
      "# take the reading; write [[reading extended, 0.0], [reading compressed, stroke]].\n"
      "calibration = [[\"?\", 0.0], [\"?\", \"?\"]]\n",
      part(end));
  return text;
}

std::string rest(const Columns& left) {
  std::string text;
  for (const StarterColumn& one : left)
    text += fmt::format("# also numeric: {}, {} to {}\n", one_line(one.column.label()), one.least,
                        one.most);
  return text +
         "\n# More keys bring more: [rider] and [chassis] masses, a spring, a damper with its "
         "clicks.\n# Without dyno data a damper can be assumed:\n"
         "# [front.damper]\n# kind = \"assumed\"\n# damping_ratio = 0.30\n"
         "# compression = { bleed = { clicks = 16, setting = 8 } }\n"
         "# rebound = { bleed = { clicks = 18, setting = 9 } }\n";
}

std::string triple(const StarterImu& imu) {
  return fmt::format("[{}, {}, {}]", as_value(imu.columns[0]), as_value(imu.columns[1]),
                     as_value(imu.columns[2]));
}

// One unit of a pair: the n-th accelerometer and gyro.
std::string unit_of(const StarterFacts& facts, std::size_t n) {
  std::string text;
  for (const bool accelerometer : {true, false}) {
    std::size_t seen = 0;
    for (const StarterImu& imu : facts.imus)
      if (imu.accelerometer == accelerometer && seen++ == n)
        text += fmt::format("{}{} = {}", text.empty() ? "" : ", ", accelerometer ? "accel" : "gyro",
                            triple(imu));
  }
  return text.empty() ? "\"?\"" : "{ " + text + " }";
}

std::string unit_line(const StarterFacts& facts, bool accelerometer) {
  const auto found = std::find_if(facts.imus.begin(), facts.imus.end(), [&](const StarterImu& imu) {
    return imu.accelerometer == accelerometer;
  });
  if (found == facts.imus.end()) return "";
  if (!accelerometer)
    return fmt::format("# gyro_unit = {}   # by its size; check it\n", quoted(found->unit));
  return fmt::format("# accel_unit = {}   # its mean is {:.3g} long: {}\n", quoted(found->unit),
                     found->size,
                     found->unit == "?" ? "neither g nor m/s2; write the columns in one of them"
                                        : "gravity; check it");
}

std::string imu_pair(const StarterFacts& facts) {
  if (facts.imus.empty()) return "";
  return "\n# The log holds what look like IMUs. A pair of them, one on the sprung and one on the "
         "unsprung\n# side of one end, can stand for its sensor: complete this and take it in "
         "place of [front.sensor].\n# [front.sensor]\n# kind = \"imu_pair\"\n# upper = " +
         unit_of(facts, 0) + "   # sprung side\n# lower = " + unit_of(facts, 1) +
         "   # unsprung side\n" + unit_line(facts, true) + unit_line(facts, false) +
         "# axis = [\"?\", \"?\", \"?\"]   # direction in which the lower unit moves into "
         "compression, in the units' frame\n";
}

}  // namespace

std::string starter_bike(const StarterFacts& facts) {
  Columns left = facts.candidates;
  std::optional<StarterColumn> front = take_named(left, EndName::front);
  std::optional<StarterColumn> rear = take_named(left, EndName::rear);
  if (!front && !rear) {
    front = take_first(left);
    rear = take_first(left);
  }
  std::string text = fmt::format(
      "# A start for {}: replace every \"?\" by what its comment asks for, and remove an end that\n"
      "# the log does not have.\nschema = \"clickwise-bike-1\"\nname = \"my bike\"\n\n",
      one_line(facts.log_name));
  text += log_table(facts);
  if (front || !rear) text += end_table(EndName::front, front);
  if (rear) text += end_table(EndName::rear, rear);
  return text + imu_pair(facts) + "\n" + rest(left);
}

}  // namespace clickwise::bike
