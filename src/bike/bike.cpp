#include "clickwise/bike/bike.hpp"

#include <fmt/format.h>

#include <utility>

#include "clickwise/core/units.hpp"

namespace clickwise::bike {

std::string ColumnRef::label() const {
  return name.empty() ? fmt::format("column {}", number) : name;
}

double SprungAccel::m_s2_per_unit() const {
  return (is_up ? 1.0 : -1.0) * (in_g ? core::standard_gravity_m_s2 : 1.0);
}

std::size_t size_of(FieldType type) {
  switch (type) {
    case FieldType::u8:
    case FieldType::i8:
      return 1;
    case FieldType::u16:
    case FieldType::i16:
      return 2;
    case FieldType::u32:
    case FieldType::i32:
    case FieldType::f32:
      return 4;
    default:
      return 8;
  }
}

std::size_t PackedFrames::frame_bytes() const {
  std::size_t bytes = 0;
  for (const PackedField& field : frame) bytes += size_of(field.type);
  return bytes;
}

const std::optional<Clicks>& DynoDamper::counted(Adjuster adjuster) const {
  switch (adjuster) {
    case Adjuster::low_speed_compression:
      return bleed_compression;
    case Adjuster::high_speed_compression:
      return valve_compression;
    case Adjuster::low_speed_rebound:
      return bleed_rebound;
    case Adjuster::high_speed_rebound:
      break;
  }
  return valve_rebound;
}

std::optional<Clicks>& DynoDamper::counted(Adjuster adjuster) {
  return const_cast<std::optional<Clicks>&>(std::as_const(*this).counted(adjuster));
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
