#include <fmt/format.h>

#include <algorithm>

#include "clickwise/io/toml.hpp"
#include "toml_node.hpp"
#include "toml_words.hpp"

namespace clickwise::io {

namespace {

const TomlEntry* entry(const TomlNode& table, std::string_view key) {
  for (const TomlEntry& candidate : table.entries)
    if (candidate.key == key) return &candidate;
  return nullptr;
}

void mark_asked(const TomlNode& table, std::string_view key) {
  if (std::find(table.asked.begin(), table.asked.end(), key) == table.asked.end())
    table.asked.emplace_back(key);
}

bool was_asked(const TomlNode& table, const std::string& key) {
  return std::find(table.asked.begin(), table.asked.end(), key) != table.asked.end();
}

[[noreturn]] void refuse_unknown(const TomlNode& table, const TomlEntry& unknown) {
  const std::string near = nearest_word(unknown.key, table.asked);
  throw core::InputError(
      unknown.key_place, fmt::format("{}: unknown key", unknown.value->name),
      near.empty() ? "remove it, or correct its name" : fmt::format("did you mean {}?", near));
}

// The keys of a table, and of the tables opened through it, that nobody asked for.
void collect_unknown(const TomlNode& node,
                     std::vector<std::pair<const TomlNode*, const TomlEntry*>>& found) {
  for (const auto& item : node.items) collect_unknown(*item, found);
  if (node.kind != TomlKind::table || !node.opened) return;
  for (const TomlEntry& one : node.entries) {
    if (!was_asked(node, one.key))
      found.emplace_back(&node, &one);
    else
      collect_unknown(*one.value, found);
  }
}

// A misspelt key is a better explanation of a missing one than its absence.
void refuse_misspelt(const TomlNode& table, std::string_view key) {
  for (const TomlEntry& one : table.entries) {
    if (was_asked(table, one.key)) continue;
    if (nearest_word(one.key, {std::string(key)}).empty()) continue;
    throw core::InputError(one.key_place, fmt::format("{}: unknown key", one.value->name),
                           fmt::format("did you mean {}?", key));
  }
}

}  // namespace

TomlTable::TomlTable(std::shared_ptr<const TomlNode> node) : node_(std::move(node)) {
  node_->opened = true;
}

const std::string& TomlTable::name() const {
  return node_->name;
}
core::Place TomlTable::place() const {
  return node_->place;
}

bool TomlTable::has(std::string_view key) const {
  return find(key).has_value();
}

std::optional<TomlValue> TomlTable::find(std::string_view key) const {
  mark_asked(*node_, key);
  const TomlEntry* found = entry(*node_, key);
  if (!found) return std::nullopt;
  return TomlValue(found->value);
}

TomlValue TomlTable::need(std::string_view key, const std::string& example) const {
  if (const auto value = find(key)) return *value;
  refuse_misspelt(*node_, key);
  const std::string whole = name().empty() ? std::string(key) : fmt::format("{}.{}", name(), key);
  throw core::InputError(place(), fmt::format("{} is missing", whole),
                         fmt::format("add for example {}", example));
}

std::vector<std::pair<std::string, TomlValue>> TomlTable::entries() const {
  std::vector<std::pair<std::string, TomlValue>> all;
  for (const TomlEntry& one : node_->entries) {
    mark_asked(*node_, one.key);
    all.emplace_back(one.key, TomlValue(one.value));
  }
  return all;
}

std::optional<double> TomlTable::number(std::string_view key, const Limits& limits) const {
  const auto value = find(key);
  return value ? std::optional(value->number(limits)) : std::nullopt;
}

double TomlTable::need_number(std::string_view key, const Limits& limits) const {
  return need(key, fmt::format("{} = {}", key, as_toml(limits.example))).number(limits);
}

double TomlTable::number_or(std::string_view key, double otherwise, const Limits& limits) const {
  return number(key, limits).value_or(otherwise);
}

std::optional<long long> TomlTable::integer(std::string_view key, long long least,
                                            long long most) const {
  const auto value = find(key);
  return value ? std::optional(value->integer(least, most)) : std::nullopt;
}

std::optional<bool> TomlTable::boolean(std::string_view key) const {
  const auto value = find(key);
  return value ? std::optional(value->boolean()) : std::nullopt;
}

std::optional<std::string> TomlTable::text(std::string_view key) const {
  const auto value = find(key);
  return value ? std::optional(value->text()) : std::nullopt;
}

std::string TomlTable::need_text(std::string_view key, const std::string& example_text) const {
  return need(key, fmt::format("{} = \"{}\"", key, example_text)).text();
}

std::optional<std::string> TomlTable::choice(std::string_view key,
                                             const std::vector<std::string_view>& words) const {
  const auto value = find(key);
  return value ? std::optional(value->choice(words)) : std::nullopt;
}

std::string TomlTable::need_choice(std::string_view key,
                                   const std::vector<std::string_view>& words) const {
  return need(key, fmt::format("{} = \"{}\"", key, words[0])).choice(words);
}

std::optional<TomlTable> TomlTable::table(std::string_view key) const {
  const auto value = find(key);
  return value ? std::optional(value->table()) : std::nullopt;
}

TomlTable TomlTable::need_table(std::string_view key, const std::string& example) const {
  return need(key, example).table();
}

std::vector<TomlTable> TomlTable::tables(std::string_view key) const {
  std::vector<TomlTable> all;
  const auto value = find(key);
  if (!value) return all;
  if (value->kind() != TomlKind::array)
    value->refuse("must be an array of tables", fmt::format("write [[{}]]", value->name()));
  for (const TomlValue& item : value->items()) all.push_back(item.table());
  return all;
}

void TomlTable::finish() const {
  std::vector<std::pair<const TomlNode*, const TomlEntry*>> unknown;
  collect_unknown(*node_, unknown);
  if (unknown.empty()) return;
  const auto first = std::min_element(unknown.begin(), unknown.end(), [](auto& a, auto& b) {
    const core::Place& left = a.second->key_place;
    const core::Place& right = b.second->key_place;
    return std::pair(left.line, left.column) < std::pair(right.line, right.column);
  });
  refuse_unknown(*first->first, *first->second);
}

void TomlTable::refuse(const std::string& wrong, const std::string& remedy) const {
  const std::string head = name().empty() ? wrong : fmt::format("{}: {}", name(), wrong);
  throw core::InputError(place(), head, remedy);
}

}  // namespace clickwise::io
