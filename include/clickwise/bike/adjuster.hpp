// The adjusters of a damper, by the names they carry in files.
#pragma once

#include <array>
#include <optional>
#include <string_view>

namespace clickwise::bike {

enum class Adjuster {
  low_speed_compression,
  high_speed_compression,
  low_speed_rebound,
  high_speed_rebound,
};

inline constexpr std::array<Adjuster, 4> all_adjusters{
    Adjuster::low_speed_compression, Adjuster::high_speed_compression, Adjuster::low_speed_rebound,
    Adjuster::high_speed_rebound};

constexpr bool acts_in_compression(Adjuster adjuster) {
  return adjuster == Adjuster::low_speed_compression ||
         adjuster == Adjuster::high_speed_compression;
}

constexpr bool is_bleed(Adjuster adjuster) {
  return adjuster == Adjuster::low_speed_compression || adjuster == Adjuster::low_speed_rebound;
}

// "low_speed_compression"
std::string_view to_string(Adjuster adjuster);

// "low-speed compression", for screens
std::string_view words(Adjuster adjuster);

std::optional<Adjuster> adjuster_from(std::string_view name);

enum class EndName { front, rear };

inline constexpr std::array<EndName, 2> both_ends{EndName::front, EndName::rear};

// "front", "rear"
std::string_view to_string(EndName end);

// "fork", "shock"
std::string_view part(EndName end);

}  // namespace clickwise::bike
