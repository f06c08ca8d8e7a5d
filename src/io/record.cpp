#include <algorithm>

#include "clickwise/io/delimited.hpp"
#include "quoted_cell.hpp"

namespace clickwise::io {

namespace {

bool separates(char c, char delimiter) {
  return c == delimiter || (delimiter == ' ' && c == '\t');
}

std::size_t skip_blanks(std::string_view text, std::size_t at) {
  while (at < text.size() && (text[at] == ' ' || text[at] == '\t')) ++at;
  return at;
}

void split_plain(std::string_view line, char delimiter, std::vector<std::string>& cells) {
  std::size_t at = 0;
  for (;;) {
    if (delimiter == ' ' && (at = skip_blanks(line, at)) == line.size()) return;
    const std::size_t end = static_cast<std::size_t>(
        std::find_if(line.begin() + static_cast<std::ptrdiff_t>(at), line.end(),
                     [&](char c) { return separates(c, delimiter); }) -
        line.begin());
    cells.emplace_back(line.substr(at, end - at));
    if (end == line.size()) return;
    at = end + 1;
  }
}

}  // namespace

QuotedCell read_quoted_cell(std::string_view text, std::size_t open, char delimiter,
                            bool line_ends) {
  QuotedCell cell;
  const std::size_t limit = std::min(text.size(), open + 1 + longest_quoted_cell);
  std::size_t at = open + 1;
  for (; at < limit; ++at) {
    if (text[at] == '\n' && !line_ends) {
      cell.open_at_line_end = true;
      return cell;
    }
    if (text[at] == '"') {
      if (at + 1 >= text.size() || text[at + 1] != '"') break;
      ++at;
    }
    cell.content += text[at];
  }
  if (at >= limit) return cell;
  ++at;
  while (at < text.size() && (text[at] == ' ' || text[at] == '\t') && text[at] != delimiter &&
         delimiter != ' ')
    ++at;
  cell.end = at;
  cell.closed = at >= text.size() || separates(text[at], delimiter) || text[at] == '\n' ||
                (text[at] == '\r' && (at + 1 >= text.size() || text[at + 1] == '\n'));
  return cell;
}

Record read_record(std::string_view text, std::size_t begin, char delimiter) {
  std::size_t line_end = std::min(text.find('\n', begin), text.size());
  Record record{{}, std::min(line_end + 1, text.size())};
  const auto plain_line = [&] {
    std::string_view line = text.substr(begin, line_end - begin);
    if (!line.empty() && line.back() == '\r') line.remove_suffix(1);
    return line;
  };
  if (plain_line().find('"') == std::string_view::npos) {
    split_plain(plain_line(), delimiter, record.cells);
    return record;
  }
  for (std::size_t at = begin;;) {
    const std::size_t first = skip_blanks(text, at);
    if (delimiter == ' ') at = first;
    std::size_t end = 0;
    if (first < text.size() && text[first] == '"') {
      QuotedCell cell = read_quoted_cell(text, first, delimiter, true);
      if (!cell.closed) {
        record = {{}, std::min(line_end + 1, text.size())};
        split_plain(plain_line(), delimiter, record.cells);
        return record;
      }
      record.cells.push_back(std::move(cell.content));
      end = cell.end;
    } else {
      end = at;
      while (end < text.size() && text[end] != '\n' && !separates(text[end], delimiter)) ++end;
      std::string_view cell = text.substr(at, end - at);
      if ((end == text.size() || text[end] == '\n') && !cell.empty() && cell.back() == '\r')
        cell.remove_suffix(1);
      if (delimiter != ' ' || !cell.empty()) record.cells.emplace_back(cell);
    }
    if (end < text.size() && text[end] == '\r') ++end;
    if (end >= text.size() || text[end] == '\n') {
      record.end = std::min(end + 1, text.size());
      return record;
    }
    at = end + 1;
  }
}

std::string quoted_cell(std::string_view cell, char delimiter) {
  const bool plain = cell.find_first_of("\"\r\n") == std::string_view::npos &&
                     cell.find(delimiter) == std::string_view::npos;
  if (plain) return std::string(cell);
  std::string quoted = "\"";
  for (const char c : cell) {
    if (c == '"') quoted += '"';
    quoted += c;
  }
  return quoted + '"';
}

}  // namespace clickwise::io
