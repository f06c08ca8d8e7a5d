#include <algorithm>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/toml.hpp"
#include "clickwise/logs/sniff.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t most_names_listed = 40;

std::string listed(const std::vector<std::string>& names) {
  std::string text;
  for (std::size_t i = 0; i < names.size() && i < most_names_listed; ++i) {
    if (i > 0) text += ", ";
    text += '"' + names[i] + '"';
  }
  return names.size() > most_names_listed ? text + " and more" : text;
}

// Letters and digits only, in lower case.
std::string bare(std::string_view name) {
  std::string text;
  for (const char c : name) {
    if (c >= 'A' && c <= 'Z') text += static_cast<char>(c + 32);
    if ((c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || (c & 0x80)) text += c;
  }
  return text;
}

std::string near_miss(const std::string& wanted, const std::vector<std::string>& names) {
  for (const std::string& name : names)
    if (bare(name) == bare(wanted)) return name;
  const std::string near = io::nearest_word(wanted, names);
  if (!near.empty()) return near;
  for (const std::string& name : names)
    if (bare(wanted).size() >= 3 &&
        (bare(name).starts_with(bare(wanted)) ||
         (bare(name).size() >= 3 && bare(wanted).starts_with(bare(name)))))
      return name;
  return {};
}

// The line of the header; the file as a whole where there are no lines.
core::Place header_place(const TextFormat& format, const std::string& path) {
  if (format.data_line == 0) return {path};
  return {path, static_cast<int>(std::max(1LL, format.data_line - 1))};
}

[[noreturn]] void refuse_unknown(const TextFormat& format, const std::string& name,
                                 const std::string& path) {
  const core::Place place = header_place(format, path);
  const std::string columns = std::to_string(format.layout.columns);
  if (!format.has_header)
    throw core::InputError({path, static_cast<int>(format.data_line)},
                           "the bike file names the column \"" + name +
                               "\", but the log has no header that fits its " + columns +
                               " columns",
                           "give the column's number, counted from 1, in the bike file");
  const std::string near = near_miss(name, format.names);
  const std::string question = near.empty() ? "" : "did you mean \"" + near + "\"? ";
  throw core::InputError(
      place, "the bike file names the column \"" + name + "\", which the log does not have",
      question + "the log has " + listed(format.names));
}

}  // namespace

std::string_view delimiter_name(char delimiter) {
  switch (delimiter) {
    case ',':
      return "comma";
    case ';':
      return "semicolon";
    case '\t':
      return "tab";
    default:
      return "blanks";
  }
}

std::string column_label(const TextFormat& format, std::size_t column) {
  const std::string& name = format.names.at(column);
  return name.empty() ? std::to_string(column + 1) : name;
}

std::size_t find_column(const TextFormat& format, const bike::ColumnRef& column,
                        const std::string& path) {
  if (column.name.empty()) {
    const bool there =
        column.number >= 1 && static_cast<std::size_t>(column.number) <= format.layout.columns;
    if (!there)
      throw core::InputError({path, static_cast<int>(format.data_line)},
                             "the bike file asks for " + column.label() + ", but the log has " +
                                 std::to_string(format.layout.columns) + " columns",
                             "give a number from 1 to " + std::to_string(format.layout.columns));
    return static_cast<std::size_t>(column.number) - 1;
  }
  const auto first = std::find(format.names.begin(), format.names.end(), column.name);
  if (first == format.names.end()) refuse_unknown(format, column.name, path);
  const auto second = std::find(first + 1, format.names.end(), column.name);
  const auto number = [&](auto name) { return std::to_string(name - format.names.begin() + 1); };
  if (second != format.names.end())
    throw core::InputError(
        header_place(format, path), "the log has more than one column \"" + column.name + "\"",
        "give the number instead: column = " + number(first) + " or " + number(second));
  return static_cast<std::size_t>(first - format.names.begin());
}

}  // namespace clickwise::logs
