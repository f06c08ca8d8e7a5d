#include "clickwise/bike/adjuster.hpp"

namespace clickwise::bike {

std::string_view to_string(Adjuster adjuster) {
  switch (adjuster) {
    case Adjuster::low_speed_compression:
      return "low_speed_compression";
    case Adjuster::high_speed_compression:
      return "high_speed_compression";
    case Adjuster::low_speed_rebound:
      return "low_speed_rebound";
    case Adjuster::high_speed_rebound:
      return "high_speed_rebound";
  }
  return {};
}

std::string_view words(Adjuster adjuster) {
  switch (adjuster) {
    case Adjuster::low_speed_compression:
      return "low-speed compression";
    case Adjuster::high_speed_compression:
      return "high-speed compression";
    case Adjuster::low_speed_rebound:
      return "low-speed rebound";
    case Adjuster::high_speed_rebound:
      return "high-speed rebound";
  }
  return {};
}

std::optional<Adjuster> adjuster_from(std::string_view name) {
  for (const Adjuster adjuster : all_adjusters)
    if (to_string(adjuster) == name) return adjuster;
  return std::nullopt;
}

std::string_view to_string(EndName end) {
  return end == EndName::front ? "front" : "rear";
}

std::string_view part(EndName end) {
  return end == EndName::front ? "fork" : "shock";
}

}  // namespace clickwise::bike
