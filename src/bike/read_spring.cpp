#include <fmt/format.h>

#include <cmath>
#include <string>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

constexpr double most_force_n = 1e6;
constexpr double most_travel_mm = 1e4;

constexpr TwoUnits rate{"rate_n_mm",
                        1.0 / core::metres_per_mm,
                        "rate_lb_in",
                        core::newtons_per_metre_per_lb_in,
                        {.least = 0.1, .most = 2000.0, .example = 80.0}};

constexpr TwoUnits pressure{"pressure_kpa",
                            core::pascals_per_kpa,
                            "pressure_psi",
                            core::pascals_per_psi,
                            {.least = 0.0, .most = 1e4, .ends_excluded = true, .example = 550.0}};

CoilSpring read_coil(const io::TomlTable& table) {
  CoilSpring coil;
  coil.rate_n_m = need_either(table, rate);
  coil.preload_m = core::from_mm(
      table.number_or("preload_mm", 0.0, {.least = 0.0, .most = 100.0, .example = 2.0}));
  return coil;
}

AirSpring read_air(const io::TomlTable& table, double stroke_m) {
  AirSpring air;
  const double area_mm2 =
      table.need_number("area_mm2", {.least = 10.0, .most = 1e5, .example = 780.0});
  const double volume_mm3 =
      table.need_number("volume_mm3", {.least = 100.0, .most = 1e8, .example = 190000.0});
  air.area_m2 = area_mm2 * core::metres_per_mm * core::metres_per_mm;
  air.volume_m3 = volume_mm3 * core::cubic_metres_per_mm3;
  air.pressure_pa = need_either(table, pressure);
  air.exponent = table.number_or("exponent", air.exponent,
                                 {.least = 1.0, .most = 2.0, .example = air.exponent});
  const double swept_mm3 = area_mm2 * core::to_mm(stroke_m);
  if (!(swept_mm3 < volume_mm3))
    table.find("volume_mm3")
        ->refuse(fmt::format("must be above area_mm2 x stroke_mm = {:.0f} mm³, the volume that the "
                             "full stroke sweeps",
                             swept_mm3),
                 "check the area, the volume and the stroke");
  return air;
}

TableSpring read_table(const io::TomlTable& table) {
  const io::TomlValue value =
      table.need("points", "points = [[0, 90], [40, 300], [120, 760], [170, 1500]]");
  const auto rows = value.rows(2, 2);
  std::vector<double> travel_m;
  std::vector<double> force_n;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    const io::TomlValue row = value.items()[i];
    if (rows[i][1] < 0.0 || rows[i][1] > most_force_n)
      row.refuse(fmt::format("the force must be from 0 to {} N", most_force_n),
                 "write [travel in mm, force in N]");
    if (std::abs(rows[i][0]) > most_travel_mm)
      row.refuse(fmt::format("the travel must be at most {} mm", most_travel_mm),
                 "write [travel in mm, force in N]");
    if (i > 0 && !(rows[i][0] > rows[i - 1][0] && rows[i][1] >= rows[i - 1][1]))
      row.refuse("travel must increase from point to point, and force must not fall",
                 "put the points in order");
    travel_m.push_back(core::from_mm(rows[i][0]));
    force_n.push_back(rows[i][1]);
  }
  TableSpring spring{core::Polyline(travel_m, force_n)};
  if (spring.force_n(0.0) < 0.0)
    value.refuse("carried on to 0 mm the force is below 0 N", "add the point at 0 mm");
  return spring;
}

Bumper read_bumper(const io::TomlTable& table, double stroke_m) {
  Bumper bumper;
  bumper.length_m = core::from_mm(
      table.need_number("length_mm", {.least = 0.1, .most = core::to_mm(stroke_m), .example = 12}));
  bumper.end_force_n =
      table.need_number("end_force_n", {.least = 0.0, .most = 1e6, .example = 2500.0});
  return bumper;
}

}  // namespace

Spring read_spring(const io::TomlTable& table, double stroke_m) {
  Spring spring;
  const std::string kind = table.need_choice("kind", {"table", "coil", "air"});
  if (kind == "coil") spring.kind = read_coil(table);
  if (kind == "air") spring.kind = read_air(table, stroke_m);
  if (kind == "table") spring.kind = read_table(table);
  if (const auto bumper = table.table("bumper")) spring.bumper = read_bumper(*bumper, stroke_m);
  return spring;
}

}  // namespace clickwise::bike
