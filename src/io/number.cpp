#include "clickwise/io/number.hpp"

#include <array>
#include <charconv>
#include <cmath>
#include <limits>

namespace clickwise::io {

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

std::string_view without_blanks(std::string_view text) {
  const auto first = text.find_first_not_of(" \t\r");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t\r") - first + 1);
}

double parse_with_point(std::string_view text) {
  double value = 0.0;
  const char* const last = text.data() + text.size();
  const auto [end, error] = std::from_chars(text.data(), last, value);
  return error == std::errc{} && end == last && std::isfinite(value) ? value : not_a_number;
}

}  // namespace

double parse_number(std::string_view text, char point) {
  text = without_blanks(text);
  if (text.size() > 1 && text[0] == '+' && text[1] != '-') text.remove_prefix(1);
  if (text.empty()) return not_a_number;
  if (point == '.') return parse_with_point(text);
  if (text.find('.') != std::string_view::npos) return not_a_number;
  std::string with_point(text);
  for (char& c : with_point)
    if (c == point) c = '.';
  return parse_with_point(with_point);
}

std::string shortest_text(double value) {
  std::array<char, 32> text{};
  const auto result = std::to_chars(text.data(), text.data() + text.size(), value);
  return {text.data(), result.ptr};
}

}  // namespace clickwise::io
