// Words and numbers as they stand in archives.
#pragma once

#include <optional>
#include <string_view>

#include "clickwise/core/units.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::archive {

inline constexpr std::string_view any_schema = "clickwise-run-";

inline float stored_mm(double metres) {
  return static_cast<float>(core::to_mm(metres));
}

inline std::string_view source_word(run::Source source) {
  return source == run::Source::imu_pair ? "imu_pair" : "potentiometer";
}

inline std::optional<run::Source> source_from(std::string_view word) {
  for (const run::Source source : {run::Source::potentiometer, run::Source::imu_pair})
    if (word == source_word(source)) return source;
  return std::nullopt;
}

}  // namespace clickwise::archive
