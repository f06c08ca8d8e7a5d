#include "clickwise/bike/bike.hpp"

#include <fmt/format.h>

namespace clickwise::bike {

std::string ColumnRef::label() const {
  return name.empty() ? fmt::format("column {}", number) : name;
}

std::optional<double> Bike::sprung_mass_kg(EndName which) const {
  if (!rider_mass_kg || !chassis_mass_kg || !front_share) return std::nullopt;
  double sprung = *rider_mass_kg + *chassis_mass_kg;
  for (const EndName each : both_ends) {
    if (!end(each)) continue;
    if (!end(each)->unsprung_mass_kg) return std::nullopt;
    sprung -= *end(each)->unsprung_mass_kg;
  }
  return sprung * (which == EndName::front ? *front_share : 1.0 - *front_share);
}

}  // namespace clickwise::bike
