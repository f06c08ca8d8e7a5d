// From toml++ to our own tree; toml++ is seen here only.
#include <fmt/format.h>
#include <toml++/toml.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <system_error>

#include "toml_node.hpp"

namespace clickwise::io {

namespace {

constexpr std::uintmax_t largest_file_bytes = 16u << 20;

core::Place place_of(const toml::source_position& at, const std::string& file) {
  return {file, static_cast<int>(at.line), static_cast<int>(at.column)};
}

bool bare(std::string_view key) {
  return !key.empty() && std::all_of(key.begin(), key.end(), [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_' ||
           c == '-';
  });
}

std::string joined(const std::string& parent, std::string_view key) {
  const std::string part = bare(key) ? std::string(key) : fmt::format("\"{}\"", key);
  return parent.empty() ? part : parent + "." + part;
}

std::shared_ptr<const TomlNode> converted(const toml::node& from, const std::string& name,
                                          const std::string& file);

void convert_table(const toml::table& from, const std::string& file, TomlNode& to) {
  to.kind = TomlKind::table;
  for (auto&& [key, value] : from)
    to.entries.push_back({std::string(key.str()), place_of(key.source().begin, file),
                          converted(value, joined(to.name, key.str()), file)});
  std::stable_sort(to.entries.begin(), to.entries.end(), [](const auto& a, const auto& b) {
    return std::pair(a.key_place.line, a.key_place.column) <
           std::pair(b.key_place.line, b.key_place.column);
  });
}

void convert_array(const toml::array& from, const std::string& file, TomlNode& to) {
  to.kind = TomlKind::array;
  for (const toml::node& item : from)
    to.items.push_back(converted(item, fmt::format("{}[{}]", to.name, to.items.size() + 1), file));
}

void convert_plain(const toml::node& from, TomlNode& to) {
  if (const auto* text = from.as_string()) {
    to.kind = TomlKind::text;
    to.text = text->get();
  } else if (const auto* integer = from.as_integer()) {
    to.kind = TomlKind::integer;
    to.integer = integer->get();
  } else if (const auto* number = from.as_floating_point()) {
    to.kind = TomlKind::number;
    to.number = number->get();
  } else if (const auto* boolean = from.as_boolean()) {
    to.kind = TomlKind::boolean;
    to.boolean = boolean->get();
  } else {
    std::ostringstream date;
    from.visit([&date](const auto& value) {
      if constexpr (toml::is_chronological<decltype(value)>) date << value;
    });
    to.kind = TomlKind::date_time;
    to.text = date.str();
  }
}

std::shared_ptr<const TomlNode> converted(const toml::node& from, const std::string& name,
                                          const std::string& file) {
  auto to = std::make_shared<TomlNode>();
  to->name = name;
  to->place = place_of(from.source().begin, file);
  if (const auto* table = from.as_table())
    convert_table(*table, file, *to);
  else if (const auto* array = from.as_array())
    convert_array(*array, file, *to);
  else
    convert_plain(from, *to);
  return to;
}

}  // namespace

TomlTable parse_toml(std::string_view text, const std::string& path) {
  try {
    const toml::table parsed = toml::parse(text, std::string_view(path));
    auto root = std::make_shared<TomlNode>();
    root->place = {path, 0, 0};
    convert_table(parsed, path, *root);
    return TomlTable(root);
  } catch (const toml::parse_error& error) {
    throw core::InputError(place_of(error.source().begin, path),
                           fmt::format("this is not TOML: {}", error.description()),
                           "correct this line");
  }
}

std::string read_toml_text(const std::string& path) {
  namespace fs = std::filesystem;
  std::error_code error;
  const core::Place place{path};
  if (fs::is_directory(path, error))
    throw core::InputError(place, "is a folder, not a file", "give the path of a TOML file");
  std::ifstream file(path, std::ios::binary);
  if (!file)
    throw core::InputError(place, "cannot be opened", "check the path and its permissions");
  std::string text(largest_file_bytes + 1, '\0');
  file.read(text.data(), static_cast<std::streamsize>(text.size()));
  if (file.bad()) throw core::InputError(place, "cannot be read", "check the file and its disk");
  text.resize(static_cast<std::size_t>(file.gcount()));
  if (text.size() > largest_file_bytes)
    throw core::InputError(place, "is larger than 16 MiB, too much for a TOML file",
                           "give the path of a TOML file");
  return text;
}

TomlTable read_toml(const std::string& path) {
  return parse_toml(read_toml_text(path), path);
}

}  // namespace clickwise::io
