#include "clickwise/core/errors.hpp"

#include <fmt/format.h>

namespace clickwise::core {

namespace {

std::string sentence(const Place& place, const std::string& wrong, const std::string& remedy) {
  if (place.file.empty()) return fmt::format("{}; {}", wrong, remedy);
  return fmt::format("{}: {}; {}", to_string(place), wrong, remedy);
}

}  // namespace

std::string to_string(const Place& place) {
  if (place.line <= 0) return place.file;
  if (place.column <= 0) return fmt::format("{}:{}", place.file, place.line);
  return fmt::format("{}:{}:{}", place.file, place.line, place.column);
}

InputError::InputError(Place place, const std::string& wrong, const std::string& remedy)
    : std::runtime_error(sentence(place, wrong, remedy)), place_(std::move(place)) {}

JobError::JobError(Place place, const std::string& wrong, const std::string& remedy)
    : std::runtime_error(sentence(place, wrong, remedy)), place_(std::move(place)) {}

}  // namespace clickwise::core
