#include "clickwise/sim/bike_clicks.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/io/toml.hpp"

namespace clickwise::sim {

namespace {

std::string asked_name(const ClickChange& change) {
  return fmt::format("{}.{}", bike::to_string(change.end), bike::to_string(change.adjuster));
}

std::optional<io::TomlTable> adjuster_table(const io::TomlTable& root, const ClickChange& change) {
  auto table = root.table(bike::to_string(change.end));
  const char* direction = bike::acts_in_compression(change.adjuster) ? "compression" : "rebound";
  const char* part = bike::is_bleed(change.adjuster) ? "bleed" : "valve";
  for (const char* key : {"damper", direction, part})
    if (table) table = table->table(key);
  return table;
}

// Byte of a place; columns count code points.
std::size_t offset_of(std::string_view text, const core::Place& place) {
  std::size_t at = 0;
  for (int line = 1; line < place.line; ++line) at = text.find('\n', at) + 1;
  for (int column = 1; column < place.column; ++column) {
    ++at;
    while (at < text.size() && (static_cast<unsigned char>(text[at]) & 0xC0U) == 0x80U) ++at;
  }
  return at;
}

void change_number(std::string& text, const core::Place& place, int setting) {
  const std::size_t begin = offset_of(text, place);
  const std::size_t end = std::min(text.size(), text.find_first_of(", \t\r\n}#", begin));
  text.replace(begin, end - begin, std::to_string(setting));
}

}  // namespace

std::optional<std::pair<bike::EndName, bike::Adjuster>> adjuster_path(std::string_view name) {
  const std::size_t point = name.find('.');
  if (point == std::string_view::npos) return std::nullopt;
  const auto adjuster = bike::adjuster_from(name.substr(point + 1));
  if (!adjuster) return std::nullopt;
  for (const auto end : bike::both_ends)
    if (name.substr(0, point) == bike::to_string(end)) return std::pair(end, *adjuster);
  return std::nullopt;
}

std::string with_clicks(std::string text, const std::string& path,
                        const std::vector<ClickChange>& changes) {
  for (const auto& change : changes) {
    const io::TomlTable root = io::parse_toml(text, path);
    const auto table = adjuster_table(root, change);
    const auto setting = table ? table->find("setting") : std::nullopt;
    if (!setting)
      throw core::InputError(change.asked_at,
                             fmt::format("{}: {} has no such adjuster", asked_name(change), path),
                             "name one that the bike file counts clicks of");
    const auto clicks = table->integer("clicks");
    if (change.setting < 0 || change.setting > clicks.value_or(0))
      throw core::InputError(
          change.asked_at, fmt::format("{} = {}: out of range", asked_name(change), change.setting),
          fmt::format("use 0 to {} clicks out", clicks.value_or(0)));
    change_number(text, setting->place(), change.setting);
  }
  return text;
}

}  // namespace clickwise::sim
