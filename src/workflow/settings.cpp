#include "clickwise/workflow/settings.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <charconv>
#include <cmath>
#include <functional>

#include "clickwise/core/units.hpp"
#include "clickwise/io/toml.hpp"

namespace clickwise::workflow {

namespace {

// A number of the bike that can be set: its name, where it lies, and what it may be.
struct Knob {
  std::string name;
  double* value = nullptr;  // SI
  int* clicks = nullptr;    // in place of value, for an adjuster
  double si_per_unit = 1.0;
  double least = 0.0;  // in the unit of the name
  double most = 0.0;
};

void add_clicks(std::vector<Knob>& knobs, const std::string& end, bike::Adjuster adjuster,
                std::optional<bike::Clicks>& clicks) {
  if (!clicks) return;
  knobs.push_back({fmt::format("{}.{}", end, bike::to_string(adjuster)), nullptr, &clicks->setting,
                   1.0, 0.0, static_cast<double>(clicks->clicks)});
}

void add_side(std::vector<Knob>& knobs, const std::string& end, bool compression,
              bike::HydraulicSide& side) {
  using bike::Adjuster;
  add_clicks(knobs, end,
             compression ? Adjuster::low_speed_compression : Adjuster::low_speed_rebound,
             side.bleed);
  add_clicks(knobs, end,
             compression ? Adjuster::high_speed_compression : Adjuster::high_speed_rebound,
             side.valve);
}

template <typename Counted>
void add_counted(std::vector<Knob>& knobs, const std::string& end, Counted& damper) {
  using bike::Adjuster;
  add_clicks(knobs, end, Adjuster::low_speed_compression, damper.bleed_compression);
  add_clicks(knobs, end, Adjuster::high_speed_compression, damper.valve_compression);
  add_clicks(knobs, end, Adjuster::low_speed_rebound, damper.bleed_rebound);
  add_clicks(knobs, end, Adjuster::high_speed_rebound, damper.valve_rebound);
}

void add_damper(std::vector<Knob>& knobs, const std::string& end, bike::Damper& damper) {
  if (auto* hydraulic = std::get_if<bike::HydraulicDamper>(&damper)) {
    add_side(knobs, end, true, hydraulic->compression);
    add_side(knobs, end, false, hydraulic->rebound);
  } else if (auto* assumed = std::get_if<bike::AssumedDamper>(&damper)) {
    add_counted(knobs, end, *assumed);
  } else {
    add_counted(knobs, end, std::get<bike::DynoDamper>(damper));
  }
}

void add_spring(std::vector<Knob>& knobs, const std::string& prefix, bike::Spring& spring) {
  using namespace core;
  if (auto* coil = std::get_if<bike::CoilSpring>(&spring.kind)) {
    knobs.push_back(
        {prefix + "rate_n_mm", &coil->rate_n_m, nullptr, 1.0 / metres_per_mm, 0.1, 5e3});
    knobs.push_back(
        {prefix + "rate_lb_in", &coil->rate_n_m, nullptr, newtons_per_metre_per_lb_in, 1.0, 3e4});
    knobs.push_back({prefix + "preload_mm", &coil->preload_m, nullptr, metres_per_mm, 0.0, 100.0});
  } else if (auto* air = std::get_if<bike::AirSpring>(&spring.kind)) {
    knobs.push_back(
        {prefix + "pressure_kpa", &air->pressure_pa, nullptr, pascals_per_kpa, 1.0, 5000.0});
    knobs.push_back(
        {prefix + "pressure_psi", &air->pressure_pa, nullptr, pascals_per_psi, 1.0, 700.0});
    knobs.push_back(
        {prefix + "volume_mm3", &air->volume_m3, nullptr, cubic_metres_per_mm3, 1e3, 1e7});
  }
  if (spring.bumper) {
    knobs.push_back({prefix + "bumper.length_mm", &spring.bumper->length_m, nullptr, metres_per_mm,
                     0.1, 200.0});
    knobs.push_back(
        {prefix + "bumper.end_force_n", &spring.bumper->end_force_n, nullptr, 1.0, 0.0, 1e5});
  }
}

void add_end(std::vector<Knob>& knobs, const std::string& name, bike::End& end) {
  if (end.damper) add_damper(knobs, name, *end.damper);
  if (end.spring) add_spring(knobs, name + ".spring.", *end.spring);
  knobs.push_back({name + ".friction_n", &end.friction_n, nullptr, 1.0, 0.0, 1000.0});
  if (end.unsprung_mass_kg)
    knobs.push_back({name + ".unsprung_mass_kg", &*end.unsprung_mass_kg, nullptr, 1.0, 0.1, 100.0});
  if (end.tyre) {
    knobs.push_back({name + ".tyre.stiffness_n_mm", &end.tyre->stiffness_n_m, nullptr,
                     1.0 / core::metres_per_mm, 1.0, 2000.0});
    knobs.push_back(
        {name + ".tyre.damping_n_s_m", &end.tyre->damping_n_s_m, nullptr, 1.0, 0.0, 1e4});
  }
}

std::vector<Knob> knobs_of(bike::Bike& bike) {
  std::vector<Knob> knobs;
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name)) add_end(knobs, std::string(bike::to_string(name)), *bike.end(name));
  if (bike.rider_mass_kg) {
    knobs.push_back({"rider.mass_kg", &*bike.rider_mass_kg, nullptr, 1.0, 10.0, 300.0});
    knobs.push_back(
        {"rider.mass_lb", &*bike.rider_mass_kg, nullptr, core::kilograms_per_pound, 22.0, 660.0});
  }
  return knobs;
}

[[noreturn]] void refuse(const std::string& text, const std::string& wrong,
                         const std::string& remedy) {
  throw core::InputError({"--set " + text}, wrong, remedy);
}

double parse_value(const std::string& text, const std::string& number) {
  double value = 0.0;
  const char* const end = number.data() + number.size();
  const auto [rest, error] = std::from_chars(number.data(), end, value);
  if (error != std::errc{} || rest != end || !std::isfinite(value))
    refuse(text, "\"" + number + "\" is not a number",
           "write for example --set front.low_speed_compression=4");
  return value;
}

Knob& find_knob(std::vector<Knob>& knobs, const std::string& text, const std::string& name) {
  const auto found =
      std::find_if(knobs.begin(), knobs.end(), [&](const Knob& knob) { return knob.name == name; });
  if (found != knobs.end()) return *found;
  std::vector<std::string> names;
  for (const Knob& knob : knobs) names.push_back(knob.name);
  const std::string nearest = io::nearest_word(name, names);
  refuse(text, "this bike has no \"" + name + "\" to set",
         nearest.empty() ? fmt::format("it has {}", fmt::join(names, ", "))
                         : "did you mean " + nearest + "?");
}

void set(const Knob& knob, const std::string& text, double value) {
  if (value < knob.least || value > knob.most)
    refuse(text, fmt::format("must be {:g} to {:g}", knob.least, knob.most),
           "stay inside the range");
  if (!knob.clicks) {
    *knob.value = value * knob.si_per_unit;
    return;
  }
  if (value != std::round(value)) refuse(text, "clicks are whole", "give a whole number");
  *knob.clicks = static_cast<int>(value);
}

}  // namespace

std::vector<ChangedSetting> apply_settings(bike::Bike& bike,
                                           const std::vector<std::string>& texts) {
  std::vector<Knob> knobs = knobs_of(bike);
  std::vector<ChangedSetting> changed;
  for (const std::string& text : texts) {
    const auto equals = text.find('=');
    if (equals == std::string::npos)
      refuse(text, "has no value", "write for example --set front.low_speed_compression=4");
    const std::string name = text.substr(0, equals);
    const Knob& knob = find_knob(knobs, text, name);
    for (const ChangedSetting& earlier : changed)
      if (earlier.name == name) refuse(text, "is set twice", "set it once");
    const double value = parse_value(text, text.substr(equals + 1));
    const double before = knob.clicks ? *knob.clicks : *knob.value / knob.si_per_unit;
    set(knob, text, value);
    changed.push_back({name, before, value});
  }
  return changed;
}

}  // namespace clickwise::workflow
