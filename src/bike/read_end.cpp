#include <algorithm>
#include <cmath>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

bool same_direction(double step, double first_step) {
  return first_step > 0.0 ? step > 0.0 : step < 0.0;
}

core::Polyline read_calibration(const io::TomlValue& value) {
  auto rows = value.rows(2, 2);
  for (std::size_t i = 1; i < rows.size(); ++i) {
    for (const std::size_t which : {0u, 1u}) {
      if (same_direction(rows[i][which] - rows[i - 1][which], rows[1][which] - rows[0][which]))
        continue;
      value.items()[i].refuse(
          which == 0 ? "the readings must rise, or fall, from point to point"
                     : "the travel must rise, or fall, from point to point",
          "give [reading, mm] points in order, each reading and each travel once");
    }
  }
  if (rows[1][0] < rows[0][0]) std::reverse(rows.begin(), rows.end());
  std::vector<double> reading;
  std::vector<double> travel_m;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    reading.push_back(rows[i][0]);
    travel_m.push_back(core::from_mm(rows[i][1]));
    if (i > 0 && !std::isfinite((travel_m[i] - travel_m[i - 1]) / (reading[i] - reading[i - 1])))
      value.refuse("two readings lie too close together, or too far apart, for a slope",
                   "take the readings again at full extension and full compression");
  }
  return core::Polyline(reading, travel_m);
}

core::Polyline read_ratio(const io::TomlValue& value, double stroke_m) {
  constexpr io::Limits limits{.least = 0.05, .most = 20.0, .example = 2.5};
  if (value.kind() != io::TomlKind::array) return core::Polyline::constant(value.number(limits));
  const auto rows = value.rows(2, 2);
  std::vector<double> shaft_m;
  std::vector<double> ratio;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    const io::TomlValue row = value.items()[i];
    if (i > 0 && !(rows[i][0] > rows[i - 1][0]))
      row.refuse("the shaft travel must increase from point to point", "put the points in order");
    ratio.push_back(row.items()[1].number(limits));
    shaft_m.push_back(core::from_mm(rows[i][0]));
  }
  core::Polyline line(shaft_m, ratio);
  if (!(line(0.0) > 0.0 && line(stroke_m) > 0.0))
    value.refuse("carried on to the ends of the stroke the ratio is not above 0",
                 "add points at 0 mm and at the full stroke");
  return line;
}

Tyre read_tyre(const io::TomlTable& table) {
  Tyre tyre;
  tyre.stiffness_n_m =
      table.need_number("stiffness_n_mm", {.least = 5.0, .most = 1000.0, .example = 90.0}) /
      core::metres_per_mm;
  tyre.damping_n_s_m = table.number_or("damping_n_s_m", tyre.damping_n_s_m,
                                       {.least = 0.0, .most = 1e4, .example = 150.0});
  return tyre;
}

std::optional<double> read_speed(const io::TomlTable& table, const char* key) {
  const auto speed =
      table.number(key, {.least = 0.0, .most = 2e4, .ends_excluded = true, .example = 700.0});
  return speed ? std::optional(core::from_mm(*speed)) : std::nullopt;
}

Split read_split(const io::TomlTable& table) {
  return {read_speed(table, "compression_mm_s"), read_speed(table, "rebound_mm_s")};
}

SprungAccel read_sprung_accel(const io::TomlTable& table) {
  SprungAccel accel;
  accel.column = read_column(table);
  accel.in_g = table.need_choice("unit", {"g", "m/s2"}) == "g";
  const auto up = table.integer("up", -1, 1);
  if (up == 0)
    table.find("up")->refuse("an axis points up or down",
                             "write up = 1 where the channel reads +1 g at rest, up = -1 where it "
                             "reads -1 g");
  accel.is_up = up.value_or(1) > 0;
  return accel;
}

void read_optional_parts(const io::TomlTable& table, const FilesBeside& beside, End& end) {
  if (const auto accel = table.table("sprung_accel")) end.sprung_accel = read_sprung_accel(*accel);
  if (const auto tyre = table.table("tyre")) end.tyre = read_tyre(*tyre);
  if (const auto ratio = table.find("ratio")) end.ratio = read_ratio(*ratio, end.stroke_m);
  if (const auto bottom_out = table.table("bottom_out"))
    end.bottom_out_within_m = core::from_mm(bottom_out->need_number(
        "within_mm", {.least = 0.1, .most = 0.5 * core::to_mm(end.stroke_m), .example = 4.0}));
  if (const auto split = table.table("split")) end.split = read_split(*split);
  if (const auto spring = table.table("spring")) end.spring = read_spring(*spring, end.stroke_m);
  if (const auto damper = table.table("damper")) {
    end.damper = read_damper(*damper, beside);
    end.damper_place = damper->place();
  }
}

}  // namespace

void read_sensor(const io::TomlTable& table, End& end) {
  const io::TomlTable sensor = table.need_table(
      "sensor", "[" + table.name() +
                    ".sensor] with kind = \"potentiometer\", column = \"fork_adc\", calibration = "
                    "[[210, 0.0], [3850, 170.0]]");
  if (sensor.need_choice("kind", {"potentiometer", "imu_pair"}) == "imu_pair") {
    end.imu = read_imu_pair(sensor);
    return;
  }
  end.sensor.column = read_column(sensor);
  end.sensor.travel_m =
      read_calibration(sensor.need("calibration", "calibration = [[210, 0.0], [3850, 170.0]]"));
  if (const auto imu = sensor.table("imu")) end.imu = read_imu_pair(*imu);
}

End read_end(const io::TomlTable& table, const FilesBeside& beside) {
  End end;
  end.stroke_m = core::from_mm(
      table.need_number("stroke_mm", {.least = 10.0, .most = 500.0, .example = 170.0}));
  read_sensor(table, end);
  end.unsprung_mass_kg =
      read_either(table, mass("unsprung_mass_kg", "unsprung_mass_lb", 0.1, 30.0, 2.9));
  end.friction_n =
      table.number_or("friction_n", end.friction_n, {.least = 0.0, .most = 1000.0, .example = 15});
  read_optional_parts(table, beside, end);
  return end;
}

}  // namespace clickwise::bike
