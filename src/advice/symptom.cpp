#include "clickwise/advice/symptom.hpp"

#include <array>
#include <cmath>

namespace clickwise::advice {

namespace {

struct Row {
  std::string_view words;
  std::string_view unit;
};

constexpr std::array<Row, 10> table{{
    {"hard bottoming", "per minute"},
    {"slow bottoming", "per minute"},
    {"rides deep", "% of stroke"},
    {"rides high", "% of stroke"},
    {"unused travel", "% of stroke"},
    {"packs down", "mm per hit"},
    {"returns too fast", "top-outs per minute"},
    {"harsh", "times the static load"},
    {"held by the platform", "% of riding time"},
    {"wallows", "of critical damping"},
}};

}  // namespace

std::string_view words(SymptomKind kind) {
  return table.at(static_cast<std::size_t>(kind)).words;
}

std::string_view unit(SymptomKind kind) {
  return table.at(static_cast<std::size_t>(kind)).unit;
}

double Symptom::certainty() const {
  return 0.5 * std::erfc(-severity / std::sqrt(2.0));
}

}  // namespace clickwise::advice
