#include "json_writer.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace clickwise::report {

namespace {

namespace json = boost::json;

void write(std::string& text, const json::value& value, std::size_t depth);

bool is_plain(const json::value& value) {
  return !value.is_object() && !value.is_array();
}

void new_line(std::string& text, std::size_t depth) {
  text += '\n';
  text.append(2 * depth, ' ');
}

void write_array(std::string& text, const json::array& array, std::size_t depth) {
  const bool one_line = std::all_of(array.begin(), array.end(), is_plain);
  text += '[';
  bool first = true;
  for (const json::value& item : array) {
    if (!first) text += one_line ? ", " : ",";
    first = false;
    if (!one_line) new_line(text, depth + 1);
    write(text, item, depth + 1);
  }
  if (!one_line) new_line(text, depth);
  text += ']';
}

void write_object(std::string& text, const json::object& object, std::size_t depth) {
  text += '{';
  bool first = true;
  for (const auto& member : object) {
    if (!first) text += ',';
    first = false;
    new_line(text, depth + 1);
    text += json::serialize(json::string(member.key()));
    text += ": ";
    write(text, member.value(), depth + 1);
  }
  if (!object.empty()) new_line(text, depth);
  text += '}';
}

void write(std::string& text, const json::value& value, std::size_t depth) {
  if (value.is_object()) return write_object(text, value.get_object(), depth);
  if (value.is_array()) return write_array(text, value.get_array(), depth);
  if (value.is_double()) {
    text += fmt::format("{}", value.get_double());
    return;
  }
  text += json::serialize(value);
}

}  // namespace

json::value number(double value) {
  if (!std::isfinite(value)) return nullptr;
  return value;
}

json::array numbers(const std::vector<double>& values, double scale) {
  json::array array;
  array.reserve(values.size());
  for (const double value : values) array.push_back(number(scale * value));
  return array;
}

std::string to_text(const json::value& value) {
  std::string text;
  write(text, value, 0);
  text += '\n';
  return text;
}

}  // namespace clickwise::report
