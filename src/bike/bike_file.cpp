#include "clickwise/bike/bike_file.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::bike {

namespace {

constexpr std::string_view schema = "clickwise-bike-1";
constexpr std::string_view any_schema = "clickwise-bike-";

void check_schema(const io::TomlTable& root) {
  const std::string example = fmt::format("schema = \"{}\"", schema);
  const auto value = root.find("schema");
  if (!value)
    root.refuse("this is not a bike file: schema is missing",
                "give a bike file, or start this one with " + example);
  const std::string found = value->text();
  if (found == schema) return;
  if (found.starts_with(any_schema))
    value->refuse("this bike file is for another version of the program",
                  "use that version, or rewrite the file as " + example);
  value->refuse("this is not a bike file", "give a file that starts with " + example);
}

void read_masses(const io::TomlTable& root, Bike& bike) {
  if (const auto rider = root.table("rider")) {
    bike.rider_mass_kg = read_either(*rider, mass("mass_kg", "mass_lb", 10.0, 300.0, 78.0));
    if (const auto hand = rider->table("hand_accel")) bike.hand_accel = read_hand_accel(*hand);
  }
  if (const auto chassis = root.table("chassis")) {
    bike.chassis_mass_kg = read_either(*chassis, mass("mass_kg", "mass_lb", 2.0, 300.0, 16.2));
    bike.front_share = chassis->number(
        "front_share", {.least = 0.0, .most = 1.0, .ends_excluded = true, .example = 0.42});
    if (const auto base =
            chassis->number("wheelbase_mm", {.least = 500.0, .most = 3000.0, .example = 1245.0}))
      bike.wheelbase_m = core::from_mm(*base);
  }
}

void check_sprung_mass(const io::TomlTable& root, const Bike& bike) {
  for (const EndName name : both_ends) {
    const auto sprung_kg = bike.sprung_mass_kg(name);
    if (bike.end(name) && sprung_kg && !(*sprung_kg > 0.0))
      root.find("chassis")->table().refuse(
          "rider and chassis weigh no more than the unsprung masses",
          "check the masses; chassis.mass_kg is the whole bike");
  }
}

std::string stem(const std::string& path) {
  return std::filesystem::path(path).stem().string();
}

}  // namespace

Bike parse_bike(const std::string& text, const std::string& path, const FilesBeside& beside) {
  const io::TomlTable root = io::parse_toml(text, path);
  check_schema(root);
  Bike bike;
  bike.file = path;
  bike.text = text;
  bike.name = root.text("name").value_or(stem(path));
  bike.log = read_log(root);
  read_masses(root, bike);
  for (const EndName name : both_ends)
    if (const auto end = root.table(to_string(name))) bike.end(name) = read_end(*end, beside);
  bike.aims = read_aims(root);
  root.finish();
  if (!bike.front && !bike.rear)
    root.refuse("neither [front] nor [rear] is there",
                "add the end that the log has a sensor on, with its stroke_mm and sensor");
  check_sprung_mass(root, bike);
  return bike;
}

Bike read_bike_file(const std::string& path) {
  return parse_bike(io::read_toml_text(path), path);
}

}  // namespace clickwise::bike
