#include "clickwise/workflow/splits.hpp"

#include <charconv>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::workflow {

namespace {

constexpr double highest_split_mm_s = 20000.0;

[[noreturn]] void refuse(const std::string& text, const std::string& wrong) {
  throw core::InputError({"--split " + text}, wrong,
                         "give a speed in mm/s, as in --split 700, or one of an end and direction, "
                         "as in --split front.compression=700");
}

double speed_m_s(const std::string& text, const std::string& number) {
  double mm_s = 0.0;
  const char* const end = number.data() + number.size();
  const auto [rest, error] = std::from_chars(number.data(), end, mm_s);
  if (error != std::errc{} || rest != end) refuse(text, "\"" + number + "\" is not a number");
  if (!(mm_s > 0.0 && mm_s <= highest_split_mm_s))
    refuse(text, "must be above 0 and at most 20000 mm/s");
  return core::from_mm(mm_s);
}

void ask(SplitRequest& request, const std::string& text) {
  const auto equals = text.find('=');
  if (equals == std::string::npos) {
    const double speed = speed_m_s(text, text);
    request.front = request.rear = {speed, speed};
    return;
  }
  const std::string where = text.substr(0, equals);
  const auto dot = where.find('.');
  const std::string end = where.substr(0, dot);
  const std::string direction = dot == std::string::npos ? "" : where.substr(dot + 1);
  if (end != "front" && end != "rear") refuse(text, "the end must be front or rear");
  bike::Split& split = end == "front" ? request.front : request.rear;
  const double speed = speed_m_s(text, text.substr(equals + 1));
  if (direction == "compression") {
    split.compression_m_s = speed;
  } else if (direction == "rebound") {
    split.rebound_m_s = speed;
  } else {
    refuse(text, "the direction must be compression or rebound");
  }
}

}  // namespace

SplitRequest parse_splits(const std::vector<std::string>& texts) {
  SplitRequest request;
  for (const std::string& text : texts) ask(request, text);
  return request;
}

}  // namespace clickwise::workflow
