#include "sample_rows.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/delimited.hpp"
#include "clickwise/io/number.hpp"
#include "clickwise/io/timestamp.hpp"
#include "text_encoding.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t most_rows = 200;

void check_line_length(std::string_view text, std::size_t begin, long long line,
                       const std::string& path) {
  if (text.size() - begin <= longest_first_line) return;
  if (text.substr(begin, longest_first_line).find('\n') != std::string_view::npos) return;
  throw core::InputError({path, static_cast<int>(line)}, "the line does not end within 1 MiB",
                         "name a log of rows; this looks like something else");
}

bool is_word_for_nothing(std::string_view cell) {
  std::string word;
  for (const char c : cell) word += static_cast<char>(c >= 'A' && c <= 'Z' ? c + 32 : c);
  if (!word.empty() && (word[0] == '-' || word[0] == '+')) word.erase(0, 1);
  constexpr std::array<std::string_view, 8> words{"nan", "inf",  "infinity", "null",
                                                  "na",  "none", "n/a",      "ovf"};
  return std::find(words.begin(), words.end(), word) != words.end();
}

}  // namespace

std::string_view trimmed(std::string_view text) {
  const auto first = text.find_first_not_of(" \t\r\n");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t\r\n") - first + 1);
}

CellClass classify(std::string_view cell, char delimiter) {
  cell = trimmed(cell);
  if (cell.empty()) return CellClass::empty;
  const bool number = !std::isnan(io::parse_number(cell)) ||
                      (delimiter != ',' && !std::isnan(io::parse_number(cell, ','))) ||
                      !std::isnan(io::parse_timestamp(cell)) || is_word_for_nothing(cell);
  return number ? CellClass::value : CellClass::text;
}

std::vector<SampleRow> sample_rows(std::string_view text, std::size_t begin, char delimiter,
                                   const std::string& path) {
  std::vector<SampleRow> rows;
  long long line = 1;
  for (std::size_t count = 0; begin < text.size() && count < most_rows;) {
    check_line_length(text, begin, line, path);
    const std::size_t line_end = std::min(text.find('\n', begin), text.size());
    const std::string_view first_line = trimmed(text.substr(begin, line_end - begin));
    std::size_t end = std::min(line_end + 1, text.size());
    if (!first_line.empty()) {
      SampleRow row{{}, {}, begin, line, first_line.front() == '#'};
      if (!row.comment) {
        io::Record record = io::read_record(text, begin, delimiter);
        for (const std::string& cell : record.cells) row.cells.emplace_back(trimmed(cell));
        end = record.end;
        ++count;
      }
      row.raw = text.substr(begin, end - begin);
      while (!row.raw.empty() && (row.raw.back() == '\n' || row.raw.back() == '\r'))
        row.raw.remove_suffix(1);
      rows.push_back(std::move(row));
    }
    const std::string_view passed = text.substr(begin, end - begin);
    line += std::count(passed.begin(), passed.end(), '\n');
    begin = end;
  }
  return rows;
}

}  // namespace clickwise::logs
