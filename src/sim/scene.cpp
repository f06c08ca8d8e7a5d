#include "clickwise/sim/scene.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/io/toml.hpp"
#include "clickwise/sim/bike_clicks.hpp"
#include "scene_readers.hpp"

namespace clickwise::sim {

namespace {

constexpr std::string_view schema = "clickwise-scene-1";

void require_schema(const io::TomlTable& root) {
  const auto value = root.need("schema", fmt::format("schema = \"{}\"", schema));
  if (value.text() != schema)
    value.refuse("is not a scene this program knows", fmt::format("write \"{}\"", schema));
}

std::vector<ClickChange> read_clicks(const io::TomlTable& root) {
  std::vector<ClickChange> changes;
  const auto set = root.table("set");
  if (!set) return changes;
  for (const auto& [key, value] : set->entries()) {
    const auto path = adjuster_path(key);
    if (!path) value.refuse("is no adjuster", "name it as in \"front.low_speed_compression\" = 4");
    changes.push_back(
        {path->first, path->second, static_cast<int>(value.integer(0, 1000)), value.place()});
  }
  return changes;
}

bike::Bike read_bike(const io::TomlTable& root, const std::string& scene_path) {
  const auto written = root.need("bike", "bike = \"bike.toml\"");
  const auto path = std::filesystem::path(scene_path).parent_path() / written.text();
  const auto changes = read_clicks(root);
  const std::string text = io::read_toml_text(path.string());
  return bike::parse_bike(with_clicks(text, path.string(), changes), path.string());
}

}  // namespace

std::uint64_t read_seed(const io::TomlTable& table, std::uint64_t otherwise) {
  const auto seed = table.integer("seed", 0);
  return seed ? static_cast<std::uint64_t>(*seed) : otherwise;
}

Scene parse_scene(const std::string& text, const std::string& path) {
  const io::TomlTable root = io::parse_toml(text, path);
  require_schema(root);
  Scene scene;
  scene.file = path;
  scene.name = root.text("name").value_or("");
  scene.seed = read_seed(root, 1);
  scene.step_s =
      1e-3 * root.number_or("step_ms", 0.1, {.least = 0.005, .most = 0.25, .example = 0.1});
  const auto ride = root.need_table("ride", "[ride] with length_m and speed");
  scene.speed = read_ride(ride);
  const auto ground = root.need_table("ground", "[ground] with class = \"D\"");
  scene.ground = read_ground(ground);
  scene.ground.seed = scene.seed;
  scene.ground.line = read_line(ride);
  scene.rolling = read_rolling(ground);
  if (const auto logger = root.table("logger")) scene.logger = read_logger(*logger);
  scene.logger.seed = scene.seed * 1000003 + scene.ground.line.seed;
  scene.bike = read_bike(root, path);
  root.finish();
  return scene;
}

Scene read_scene(const std::string& path) {
  return parse_scene(io::read_toml_text(path), path);
}

}  // namespace clickwise::sim
