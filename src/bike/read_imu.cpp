#include <cmath>

#include "bike_readers.hpp"

namespace clickwise::bike {

namespace {

constexpr const char* unit_example = "{ accel = [\"fork_ax\", \"fork_ay\", \"fork_az\"] }";

ColumnRef column_of(const io::TomlValue& value) {
  if (value.kind() == io::TomlKind::text) return {value.text(), 0};
  if (value.kind() == io::TomlKind::integer)
    return {"", static_cast<int>(value.integer(1, most_columns))};
  value.refuse("must be a header's name in quotes, or a column's number counted from 1",
               "write for example \"fork_ax\" or 2");
}

ThreeColumns three_columns(const io::TomlValue& value) {
  const auto items = value.items();
  if (items.size() != 3)
    value.refuse("must be the three columns of x, y and z",
                 "write for example [\"fork_ax\", \"fork_ay\", \"fork_az\"]");
  const ThreeColumns columns{column_of(items[0]), column_of(items[1]), column_of(items[2])};
  for (const auto& [a, b] : {std::pair{0u, 1u}, std::pair{0u, 2u}, std::pair{1u, 2u}})
    if (columns[a] == columns[b])
      value.refuse("names " + columns[a].label() + " twice", "give each axis a column of its own");
  return columns;
}

ImuUnit read_unit(const io::TomlTable& pair, const char* which) {
  const io::TomlTable table = pair.need_table(which, std::string(which) + " = " + unit_example);
  ImuUnit unit;
  if (const auto accel = table.find("accel")) unit.accel = three_columns(*accel);
  if (const auto gyro = table.find("gyro")) unit.gyro = three_columns(*gyro);
  return unit;
}

Direction read_direction(const io::TomlTable& pair, const char* key) {
  const io::TomlValue value = pair.need(key, std::string(key) + " = [0, 0, 1]");
  const auto numbers = value.numbers();
  if (numbers.size() != 3) value.refuse("must be three numbers", "write for example [0, 0, 1]");
  const double length = std::hypot(numbers[0], numbers[1], numbers[2]);
  if (!(length > 1e-6)) value.refuse("has no direction", "write for example [0, 0, 1]");
  return {numbers[0] / length, numbers[1] / length, numbers[2] / length};
}

core::Polyline read_swing(const io::TomlValue& value) {
  const auto rows = value.rows(2, 2);
  std::vector<double> angle_rad;
  std::vector<double> wheel_m;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    angle_rad.push_back((rows[i][0] - rows[0][0]) * core::radians_per_degree);
    wheel_m.push_back(core::from_mm(rows[i][1]));
    if (i > 0 && !(rows[i][0] > rows[i - 1][0] && rows[i][1] > rows[i - 1][1]))
      value.items()[i].refuse("angle and wheel travel must increase from point to point",
                              "give [angle_deg, wheel_mm] points in order, from full extension");
  }
  return {angle_rad, wheel_m};
}

void need_both(const io::TomlTable& pair, bool upper, bool lower, const char* what) {
  if (upper == lower) return;
  pair.refuse(std::string(upper ? "lower" : "upper") + " has no " + what,
              std::string("give both units their ") + what + ", or neither");
}

void read_swinging(const io::TomlTable& table, ImuPair& pair) {
  if (!pair.upper.gyro || !pair.lower.gyro)
    table.refuse("a swinging link is measured by two gyros, and one is missing",
                 "give upper and lower their gyro = [x, y, z] columns");
  pair.axis = read_direction(table, "swing_axis");
  const auto arm = table.number("arm_mm", {.least = 20.0, .most = 2000.0, .example = 430.0});
  const auto swing = table.find("swing");
  if (arm && swing) swing->refuse("arm_mm says it as well", "keep one of the two");
  if (!arm && !swing)
    table.refuse("how far the wheel goes with the link is missing",
                 "add arm_mm = 430 (wheel travel per radian) or swing = [[angle_deg, wheel_mm], "
                 "...]");
  pair.swing_m =
      swing ? read_swing(*swing) : core::Polyline({0.0, 1.0}, {0.0, core::from_mm(*arm)});
}

void read_sliding(const io::TomlTable& table, ImuPair& pair) {
  if (!pair.upper.accel || !pair.lower.accel)
    table.refuse("a sliding pair is measured by two accelerometers, and one is missing",
                 "give upper and lower their accel = [x, y, z] columns, or write swing_axis and "
                 "arm_mm for a link that swings");
  need_both(table, pair.upper.gyro.has_value(), pair.lower.gyro.has_value(), "gyro");
  pair.axis = read_direction(table, "axis");
  pair.metres_per_second2_per_unit = read_accel_unit(table, "accel_unit");
  if (const auto range = table.number(
          "range_g", {.least = 1.0, .most = 5000.0, .ends_excluded = false, .example = 16.0}))
    pair.range_m_s2 = *range * core::standard_gravity_m_s2;
  pair.spacing_m = core::from_mm(table.number_or("spacing_mm", core::to_mm(pair.spacing_m),
                                                 {.least = 0.0, .most = 2000.0, .example = 400.0}));
}

}  // namespace

double read_accel_unit(const io::TomlTable& table, const char* key) {
  return table.need_choice(key, {"g", "m/s2"}) == "g" ? core::standard_gravity_m_s2 : 1.0;
}

ImuPair read_imu_pair(const io::TomlTable& table) {
  ImuPair pair;
  pair.upper = read_unit(table, "upper");
  pair.lower = read_unit(table, "lower");
  const bool swings = table.has("swing_axis") || table.has("arm_mm") || table.has("swing");
  if (swings)
    read_swinging(table, pair);
  else
    read_sliding(table, pair);
  if (pair.upper.gyro)
    pair.radians_per_second_per_unit = table.need_choice("gyro_unit", {"deg/s", "rad/s"}) == "deg/s"
                                           ? core::radians_per_degree
                                           : 1.0;
  if (swings && pair.upper.accel) read_accel_unit(table, "accel_unit");
  return pair;
}

Accelerometer read_hand_accel(const io::TomlTable& table) {
  Accelerometer accel;
  accel.columns =
      three_columns(table.need("columns", "columns = [\"bar_ax\", \"bar_ay\", \"bar_az\"]"));
  accel.metres_per_second2_per_unit = read_accel_unit(table, "unit");
  return accel;
}

}  // namespace clickwise::bike
