#include "last_line.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "clickwise/io/number.hpp"

namespace clickwise::io {

namespace {

constexpr std::size_t rows_compared = 64;
constexpr std::size_t longest_line_compared = std::size_t{1} << 16U;

std::string_view trimmed(std::string_view text) {
  const auto first = text.find_first_not_of(" \t\r");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t\r") - first + 1);
}

std::size_t decimals(std::string_view cell, char point) {
  const auto mark = cell.find(point);
  if (mark == std::string_view::npos) return 0;
  const auto end = cell.find_first_not_of("0123456789", mark + 1);
  return std::min(end, cell.size()) - mark - 1;
}

// The last cells of up to 64 whole rows in front of byte `end`, the nearest first.
std::vector<std::string> last_cells_before(std::string_view text, std::size_t end,
                                           const TextLayout& layout) {
  std::vector<std::string> cells;
  for (std::size_t lines = 0; end > layout.data_begin && lines < rows_compared; ++lines) {
    const std::size_t mark = end < 2 ? std::string_view::npos : text.rfind('\n', end - 2);
    std::size_t begin = mark == std::string_view::npos ? 0 : mark + 1;
    begin = std::max(begin, layout.data_begin);
    if (end - begin > longest_line_compared) break;
    const Record record = read_record(text.substr(0, end), begin, layout.delimiter);
    if (record.cells.size() == layout.columns) cells.emplace_back(trimmed(record.cells.back()));
    end = begin;
  }
  return cells;
}

// The largest step between neighbours, nearest to the end first; 0 for fewer than two numbers.
double largest_step(const std::vector<std::string>& cells, char point) {
  double largest = 0.0;
  for (std::size_t i = 0; i + 1 < cells.size(); ++i) {
    const double step = std::abs(parse_number(cells[i], point) - parse_number(cells[i + 1], point));
    if (step > largest) largest = step;
  }
  return largest;
}

bool looks_cut(std::string_view cell, const std::vector<std::string>& before, char point) {
  if (before.empty()) return false;
  std::size_t shortest = cell.size() + 1;
  std::size_t fewest_decimals = std::numeric_limits<std::size_t>::max();
  for (const std::string& other : before) {
    shortest = std::min(shortest, other.size());
    fewest_decimals = std::min(fewest_decimals, decimals(other, point));
  }
  if (cell.size() < shortest || decimals(cell, point) < fewest_decimals) return true;
  const double value = parse_number(cell, point);
  const double previous = parse_number(before.front(), point);
  if (std::isnan(previous)) return false;
  const double step = largest_step(before, point);
  return std::isnan(value) || (step > 0.0 && std::abs(value - previous) > step);
}

}  // namespace

LastLine judge_last_line(std::string_view text, const TextLayout& layout) {
  LastLine last{text.size(), false};
  if (text.size() <= layout.data_begin || text.back() == '\n') return last;
  const std::size_t mark = text.rfind('\n');
  last.begin = std::max(layout.data_begin, mark == std::string_view::npos ? 0 : mark + 1);
  const std::size_t first = text.find_first_not_of(" \t\r", last.begin);
  if (first == std::string_view::npos || text[first] == '#') return last;
  if (text.size() - last.begin > longest_line_compared) {
    last.cut = true;
    return last;
  }
  const Record record = read_record(text, last.begin, layout.delimiter);
  if (record.cells.size() != layout.columns) {
    last.cut = true;
    return last;
  }
  last.cut = looks_cut(trimmed(record.cells.back()), last_cells_before(text, last.begin, layout),
                       layout.point);
  return last;
}

}  // namespace clickwise::io
