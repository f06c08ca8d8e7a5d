#include <fmt/format.h>
#include <fmt/ranges.h>

#include <algorithm>
#include <cmath>

#include "clickwise/io/toml.hpp"
#include "toml_node.hpp"
#include "toml_words.hpp"

namespace clickwise::io {

namespace {

constexpr long long exact_in_double = 1LL << 53;

std::string number_example(const TomlValue& value, double example) {
  const std::string key = value.key();
  if (key.ends_with(']')) return fmt::format("write for example {}", as_toml(example));
  return fmt::format("write for example {} = {}", key, as_toml(example));
}

bool within(double value, const Limits& limits) {
  if (limits.ends_excluded) return value > limits.least && value < limits.most;
  return value >= limits.least && value <= limits.most;
}

std::vector<std::string> strings(const std::vector<std::string_view>& words) {
  return {words.begin(), words.end()};
}

}  // namespace

TomlKind TomlValue::kind() const {
  return node_->kind;
}
const std::string& TomlValue::name() const {
  return node_->name;
}
core::Place TomlValue::place() const {
  return node_->place;
}

std::string TomlValue::key() const {
  return name().substr(name().rfind('.') + 1);
}

double TomlValue::number(const Limits& limits) const {
  const bool whole = kind() == TomlKind::integer;
  if (!whole && kind() != TomlKind::number)
    refuse(fmt::format("must be a number{}", unit_phrase(key())),
           number_example(*this, limits.example));
  if (whole && (node_->integer > exact_in_double || node_->integer < -exact_in_double))
    refuse("is too large a number", number_example(*this, limits.example));
  const double value = whole ? static_cast<double>(node_->integer) : node_->number;
  if (!std::isfinite(value))
    refuse(fmt::format("must be a finite number{}", unit_phrase(key())),
           number_example(*this, limits.example));
  if (!within(value, limits))
    refuse(limits_phrase(limits, key()), number_example(*this, limits.example));
  return value;
}

long long TomlValue::integer(long long least, long long most) const {
  if (kind() != TomlKind::integer)
    refuse("must be a whole number",
           fmt::format("write for example {} = {}", key(), std::clamp<long long>(8, least, most)));
  const long long value = node_->integer;
  if (value >= least && value <= most) return value;
  if (most == std::numeric_limits<long long>::max())
    refuse(fmt::format("must be a whole number, at least {}", least), "correct the number");
  refuse(fmt::format("must be a whole number from {} to {}", least, most), "correct the number");
}

bool TomlValue::boolean() const {
  if (kind() != TomlKind::boolean)
    refuse("must be true or false", fmt::format("write for example {} = true", key()));
  return node_->boolean;
}

std::string TomlValue::text() const {
  if (kind() != TomlKind::text || node_->text.empty())
    refuse("must be a text in quotes", fmt::format("write for example {} = \"…\"", key()));
  return node_->text;
}

std::string TomlValue::choice(const std::vector<std::string_view>& words) const {
  const std::string listed = fmt::format("\"{}\"", fmt::join(words, "\", \""));
  if (kind() == TomlKind::text && std::find(words.begin(), words.end(), node_->text) != words.end())
    return node_->text;
  const std::string near =
      kind() == TomlKind::text ? nearest_word(node_->text, strings(words)) : std::string();
  refuse(fmt::format("must be {}{}", words.size() > 1 ? "one of " : "", listed),
         fmt::format("write for example {} = \"{}\"", key(), near.empty() ? words[0] : near));
}

std::vector<TomlValue> TomlValue::items() const {
  if (kind() != TomlKind::array)
    refuse("must be an array", fmt::format("write for example {} = [ … ]", key()));
  std::vector<TomlValue> values;
  for (const auto& item : node_->items) values.emplace_back(item);
  return values;
}

std::vector<double> TomlValue::numbers() const {
  std::vector<double> values;
  for (const TomlValue& item : items()) values.push_back(item.number());
  return values;
}

std::vector<std::vector<double>> TomlValue::rows(std::size_t width, std::size_t least_rows) const {
  const auto wrong = [this, width, least_rows](const TomlValue& where) {
    where.refuse(fmt::format("must be rows of {} numbers, at least {} of them", width, least_rows),
                 fmt::format("write for example {} = [[{}], … ]", key(),
                             fmt::join(std::vector<double>(width, 0.5), ", ")));
  };
  if (kind() != TomlKind::array || node_->items.size() < least_rows) wrong(*this);
  std::vector<std::vector<double>> result;
  for (const TomlValue& row : items()) {
    if (row.kind() != TomlKind::array || row.node_->items.size() != width) wrong(row);
    result.push_back(row.numbers());
  }
  return result;
}

TomlTable TomlValue::table() const {
  if (kind() != TomlKind::table)
    refuse("must be a table", fmt::format("write [{}] or {} = {{ … }}", name(), key()));
  return TomlTable(node_);
}

void TomlValue::refuse(const std::string& wrong, const std::string& remedy) const {
  throw core::InputError(place(), fmt::format("{} = {}: {}", name(), shown(*node_), wrong), remedy);
}

}  // namespace clickwise::io
