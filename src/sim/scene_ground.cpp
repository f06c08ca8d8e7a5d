#include <algorithm>

#include "scene_readers.hpp"

namespace clickwise::sim {

namespace {

constexpr io::Limits places_m{.least = 0.0, .most = 1e5, .example = 120.0};
constexpr io::Limits lengths_m{.least = 0.0, .most = 1e4, .ends_excluded = true, .example = 2.0};
constexpr io::Limits heights_m{.least = 0.0, .most = 5.0, .example = 0.12};
constexpr long long most_roots = 10000;

double roughness_of(const std::string& letter) {
  return letter == "smooth" ? 0.0 : roughness_class(letter[0]).mean_m3;
}

const std::vector<std::string_view>& class_words() {
  static const std::vector<std::string_view> words{"smooth", "A", "B", "C", "D",
                                                   "E",      "F", "G", "H"};
  return words;
}

RoughSection read_section(const io::TomlTable& section) {
  const double from = section.need_number("from_m", places_m);
  const double to = section.need_number("to_m", places_m);
  if (!(to > from))
    section.find("to_m")->refuse("must be beyond from_m", "write the nearer distance in from_m");
  return {from, to, roughness_of(section.need_choice("class", class_words()))};
}

Rock read_rock(const io::TomlTable& rock, double at) {
  const auto shape = rock.choice("shape", {"half_sine", "trapezoid"});
  return {at, rock.need_number("height_m", heights_m), rock.need_number("length_m", lengths_m),
          shape == "trapezoid"};
}

RockGarden read_garden(const io::TomlTable& garden, double at) {
  return {at, garden.need_number("length_m", lengths_m),
          garden.need_number("per_m", {.least = 0.0, .most = 20.0, .example = 1.5}),
          garden.need_number("height_m", heights_m)};
}

Roots read_roots(const io::TomlTable& roots, double at) {
  Roots out;
  out.at_m = at;
  out.height_m = roots.need_number("height_m", heights_m);
  out.length_m = roots.number_or("length_m", out.length_m, lengths_m);
  out.spacing_m = roots.number_or("spacing_m", out.spacing_m, lengths_m);
  out.count = static_cast<int>(roots.need("count", "count = 8").integer(1, most_roots));
  return out;
}

Kicker read_kicker(const io::TomlTable& kicker, double at) {
  return {at, kicker.need_number("height_m", heights_m), kicker.need_number("length_m", lengths_m),
          kicker.number_or("drop_m", 0.0, heights_m)};
}

Compression read_hollow(const io::TomlTable& hollow, double at) {
  return {at, hollow.need_number("depth_m", heights_m), hollow.need_number("length_m", lengths_m)};
}

Feature read_feature(const io::TomlTable& feature) {
  const std::string kind = feature.need_choice(
      "kind", {"rock", "rock_garden", "roots", "kicker", "drop", "compression"});
  const double at = feature.need_number("at_m", places_m);
  if (kind == "rock") return read_rock(feature, at);
  if (kind == "rock_garden") return read_garden(feature, at);
  if (kind == "roots") return read_roots(feature, at);
  if (kind == "kicker") return read_kicker(feature, at);
  if (kind == "drop") return Drop{at, feature.need_number("height_m", heights_m)};
  return read_hollow(feature, at);
}

}  // namespace

GroundPlan read_ground(const io::TomlTable& ground) {
  GroundPlan plan;
  plan.roughness_m3 = roughness_of(ground.need_choice("class", class_words()));
  for (const auto& section : ground.tables("section"))
    plan.sections.push_back(read_section(section));
  for (const auto& feature : ground.tables("feature"))
    plan.features.push_back(read_feature(feature));
  return plan;
}

Rolling read_rolling(const io::TomlTable& ground) {
  Rolling rolling;
  rolling.wheel_radius_m = ground.number_or("wheel_radius_m", rolling.wheel_radius_m,
                                            {.least = 0.1, .most = 1.0, .example = 0.36});
  rolling.patch_m = ground.number_or("contact_length_m", rolling.patch_m,
                                     {.least = 0.0, .most = 1.0, .example = 0.1});
  return rolling;
}

}  // namespace clickwise::sim
