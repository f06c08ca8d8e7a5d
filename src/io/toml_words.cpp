#include "toml_words.hpp"

#include <fmt/format.h>

#include <array>
#include <cmath>

#include "toml_node.hpp"

namespace clickwise::io {

namespace {

constexpr std::size_t longest_shown = 40;

struct Unit {
  std::string_view suffix;
  std::string_view words;
};

// Longer suffixes stand before those that end them.
constexpr std::array units{
    Unit{"_n_s2_m2", "N s²/m²"},
    Unit{"_n_s_m", "N s/m"},
    Unit{"_lb_in", "lb/in"},
    Unit{"_n_mm", "N/mm"},
    Unit{"_km_h", "km/h"},
    Unit{"_mm_s", "mm/s"},
    Unit{"_m_s2", "m/s²"},
    Unit{"_m_s", "m/s"},
    Unit{"_n_m", "N/m"},
    Unit{"_mm2", "mm²"},
    Unit{"_mm3", "mm³"},
    Unit{"_kpa", "kPa (gauge)"},
    Unit{"_psi", "psi (gauge)"},
    Unit{"_deg", "degrees"},
    Unit{"_rad", "radians"},
    Unit{"_mm", "mm"},
    Unit{"_kg", "kg"},
    Unit{"_lb", "lb"},
    Unit{"_hz", "Hz"},
    Unit{"_ms", "ms"},
    Unit{"_us", "µs"},
    Unit{"_m", "m"},
    Unit{"_s", "s"},
    Unit{"_n", "N"},
};

std::string_view unit_of(std::string_view key) {
  for (const Unit& unit : units)
    if (key.size() > unit.suffix.size() && key.ends_with(unit.suffix)) return unit.words;
  return {};
}

std::string with_unit(double value, std::string_view key) {
  const std::string_view unit = unit_of(key);
  return unit.empty() ? fmt::format("{:.6g}", value) : fmt::format("{:.6g} {}", value, unit);
}

std::string printable(std::string_view text) {
  std::string out;
  for (const char c : text) {
    if (out.size() >= longest_shown) return out + "…";
    const auto byte = static_cast<unsigned char>(c);
    out += byte < 0x20 || byte == 0x7f ? '?' : c;
  }
  return out;
}

}  // namespace

std::string as_toml(double number) {
  std::string text = fmt::format("{}", number);
  if (text.find_first_of(".en") == std::string::npos) text += ".0";
  return text;
}

std::string shown(const TomlNode& node) {
  switch (node.kind) {
    case TomlKind::text:
      return fmt::format("\"{}\"", printable(node.text));
    case TomlKind::integer:
      return fmt::format("{}", node.integer);
    case TomlKind::number:
      return as_toml(node.number);
    case TomlKind::boolean:
      return node.boolean ? "true" : "false";
    case TomlKind::date_time:
      return printable(node.text);
    case TomlKind::array:
      return "[…]";
    case TomlKind::table:
      return "{…}";
  }
  return {};
}

std::string unit_phrase(std::string_view key) {
  const std::string_view unit = unit_of(key);
  return unit.empty() ? std::string() : fmt::format(" in {}", unit);
}

std::string limits_phrase(const Limits& limits, std::string_view key) {
  const bool low = std::isfinite(limits.least);
  const bool high = std::isfinite(limits.most);
  const std::string most = with_unit(limits.most, key);
  if (low && high && limits.ends_excluded)
    return fmt::format("must be above {:.6g} and below {}", limits.least, most);
  if (low && high) return fmt::format("must be from {:.6g} to {}", limits.least, most);
  if (low)
    return fmt::format("must be {} {}", limits.ends_excluded ? "above" : "at least",
                       with_unit(limits.least, key));
  return fmt::format("must be {} {}", limits.ends_excluded ? "below" : "at most", most);
}

}  // namespace clickwise::io
