#include <fmt/format.h>
#include <fmt/ranges.h>

#include <string>
#include <vector>

#include "clickwise/bike/spring.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/damper/damper.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

namespace {

std::vector<std::string> missing_keys(const bike::Bike& bike, const bike::End& end,
                                      std::string_view name) {
  std::vector<std::string> keys;
  if (!bike.rider_mass_kg) keys.emplace_back("rider.mass_kg");
  if (!bike.chassis_mass_kg) keys.emplace_back("chassis.mass_kg");
  if (!bike.front_share) keys.emplace_back("chassis.front_share");
  if (!end.unsprung_mass_kg) keys.push_back(fmt::format("{}.unsprung_mass_kg", name));
  if (!end.spring) keys.push_back(fmt::format("{}.spring", name));
  if (!end.damper) keys.push_back(fmt::format("{}.damper", name));
  return keys;
}

}  // namespace

VehicleEnd VehicleEnd::from(const bike::Bike& bike, bike::EndName name) {
  const std::string_view word = bike::to_string(name);
  const core::Place place{bike.file, 0, 0};
  const auto& end = bike.end(name);
  if (!end)
    throw core::JobError(place, fmt::format("the bike has no {} end to model", word),
                         fmt::format("add [{}] with its stroke, sensor, spring and damper", word));
  const auto missing = missing_keys(bike, *end, word);
  const auto sprung_kg = bike.sprung_mass_kg(name);
  if (!missing.empty() || !sprung_kg)
    throw core::JobError(place, fmt::format("the {} end cannot be modelled", word),
                         fmt::format("add {}", fmt::join(missing, ", ")));
  const auto force = [&](double travel_m) {
    return bike::spring_force_n(*end->spring, travel_m, end->stroke_m);
  };
  return {.sprung_mass_kg = *sprung_kg,
          .unsprung_mass_kg = *end->unsprung_mass_kg,
          .stroke_m = end->stroke_m,
          .friction_n = end->friction_n,
          .tyre = end->tyre.value_or(bike::Tyre{}),
          .curve = damper::Damper::from(*end, sprung_kg, place).curve(),
          .stop = {},
          .table = WheelTable(end->stroke_m, end->ratio, force)};
}

}  // namespace clickwise::sim
