#include "clickwise/advice/symptom.hpp"

#include <array>
#include <cmath>

namespace clickwise::advice {

namespace {

struct Row {
  std::string_view words;
  std::string_view unit;
  double tolerance;
};

constexpr std::array<Row, 10> table{{
    {"hard bottoming", "per minute", 0.25},
    {"slow bottoming", "per minute", 1.0},
    {"rides deep", "% of stroke", 2.0},
    {"rides high", "% of stroke", 2.0},
    {"unused travel", "% of stroke", 3.0},
    {"packs down", "mm per hit", 0.5},
    {"returns too fast", "top-outs per minute", 5.0},
    {"harsh", "times the static load", 0.3},
    {"held by the platform", "% of riding time", 5.0},
    {"wallows", "of critical damping", 0.02},
}};

}  // namespace

std::string_view words(SymptomKind kind) {
  return table.at(static_cast<std::size_t>(kind)).words;
}

std::string_view unit(SymptomKind kind) {
  return table.at(static_cast<std::size_t>(kind)).unit;
}

double aim_tolerance(SymptomKind kind) {
  return table.at(static_cast<std::size_t>(kind)).tolerance;
}

double Symptom::certainty() const {
  return 0.5 * std::erfc(-severity / std::sqrt(2.0));
}

}  // namespace clickwise::advice
