#include "clickwise/logs/sniff.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <map>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/utf8.hpp"
#include "clickwise/io/number.hpp"
#include "sample_rows.hpp"
#include "text_encoding.hpp"

namespace clickwise::logs {

namespace {

using Rows = std::vector<SampleRow>;

// One delimiter tried on the first lines.
struct Trial {
  char delimiter = ',';
  Rows rows;
  std::size_t columns = 1;  // the commonest number of cells
  double score = 0.0;       // share of rows with that number, times share of values in them
};

// Rows that should be data: behind the first half, and without a last line that may be cut off.
std::vector<const SampleRow*> likely_data(const Rows& rows, bool last_may_be_cut) {
  std::vector<const SampleRow*> data;
  for (const SampleRow& row : rows)
    if (!row.comment) data.push_back(&row);
  if (last_may_be_cut && data.size() >= 3) data.pop_back();
  data.erase(data.begin(), data.begin() + static_cast<std::ptrdiff_t>(data.size() / 2));
  return data;
}

std::size_t commonest_count(const std::vector<const SampleRow*>& data) {
  std::map<std::size_t, std::size_t> counts;
  for (const SampleRow* row : data) ++counts[row->cells.size()];
  std::size_t best = 1;
  std::size_t most = 0;
  for (const auto& [cells, rows] : counts) {
    if (rows < most) continue;
    best = cells;
    most = rows;
  }
  return best;
}

Trial try_delimiter(std::string_view text, std::size_t begin, char delimiter,
                    const std::string& path) {
  Trial trial{delimiter, sample_rows(text, begin, delimiter, path)};
  const auto data = likely_data(trial.rows, text.back() != '\n');
  if (data.empty()) return trial;
  trial.columns = std::max<std::size_t>(1, commonest_count(data));
  double regular = 0.0;
  double cells = 0.0;
  double values = 0.0;
  for (const SampleRow* row : data) {
    if (row->cells.size() != trial.columns) continue;
    regular += 1.0;
    for (const std::string& cell : row->cells) {
      const CellClass kind = classify(cell, delimiter);
      cells += kind != CellClass::empty;
      values += kind == CellClass::value;
    }
  }
  trial.score = regular / static_cast<double>(data.size()) * (cells > 0 ? values / cells : 0.1);
  return trial;
}

const SampleRow* first_row(const Trial& trial) {
  const auto row = std::find_if(trial.rows.begin(), trial.rows.end(),
                                [](const SampleRow& r) { return !r.comment; });
  return row == trial.rows.end() ? nullptr : &*row;
}

// A single column of decimal commas under a single name is not two columns.
bool is_one_column_of_decimal_commas(const Trial& comma, const Trial& semicolon) {
  const SampleRow* const first = first_row(comma);
  return comma.columns == 2 && semicolon.columns == 1 && semicolon.score > 0.9 &&
         first != nullptr && first->cells.size() == 1 &&
         classify(first->cells[0], ',') == CellClass::text;
}

Trial choose_trial(std::string_view text, std::size_t begin, const std::string& path) {
  std::vector<Trial> trials;
  for (const char delimiter : {'\t', ';', ',', ' '})
    trials.push_back(try_delimiter(text, begin, delimiter, path));
  if (is_one_column_of_decimal_commas(trials[2], trials[1])) return std::move(trials[1]);
  double best = 0.0;
  for (const Trial& trial : trials)
    if (trial.columns > 1) best = std::max(best, trial.score);
  for (Trial& trial : trials)
    if (trial.columns > 1 && trial.score > 0.0 && trial.score >= 0.95 * best)
      return std::move(trial);
  return std::move(trials[trials[1].score > trials[2].score ? 1 : 2]);
}

char decimal_mark(const Trial& trial) {
  if (trial.delimiter == ',') return '.';
  std::size_t commas = 0;
  std::size_t points = 0;
  for (const SampleRow& row : trial.rows)
    for (const std::string& cell : row.cells) {
      const bool comma = cell.find(',') != std::string::npos;
      const bool point = cell.find('.') != std::string::npos;
      commas += comma && !std::isnan(io::parse_number(cell, ','));
      points += point && !std::isnan(io::parse_number(cell));
    }
  return commas > points ? ',' : '.';
}

// Columns in which most cells that hold something hold a value.
std::vector<bool> value_columns(const Trial& trial, bool last_may_be_cut) {
  std::vector<int> balance(trial.columns, 0);
  for (const SampleRow* row : likely_data(trial.rows, last_may_be_cut)) {
    if (row->cells.size() != trial.columns) continue;
    for (std::size_t k = 0; k < trial.columns; ++k) {
      const CellClass kind = classify(row->cells[k], trial.delimiter);
      if (kind != CellClass::empty) balance[k] += kind == CellClass::value ? 1 : -1;
    }
  }
  std::vector<bool> columns;
  for (const int sum : balance) columns.push_back(sum > 0);
  return columns;
}

bool is_data(const SampleRow& row, const Trial& trial, const std::vector<bool>& of_values) {
  if (row.comment || row.cells.size() != trial.columns) return false;
  int balance = 0;
  for (std::size_t k = 0; k < trial.columns; ++k) {
    if (!of_values[k]) continue;
    const CellClass kind = classify(row.cells[k], trial.delimiter);
    if (kind != CellClass::empty) balance += kind == CellClass::value ? 1 : -1;
  }
  return balance > 0;
}

bool is_unit(std::string_view cell) {
  constexpr std::array<std::string_view, 34> units{
      "s",   "ms",  "us",  "µs", "mm",    "m",   "cm",  "mm/s",   "m/s", "m/s2", "m/s^2", "km/h",
      "kph", "g",   "deg", "°",  "deg/s", "°/s", "dps", "rad/s",  "v",   "mv",   "a",     "n",
      "kpa", "bar", "psi", "°c", "degc",  "%",   "hz",  "counts", "raw", "-"};
  std::string lower;
  for (const char c : cell) lower += static_cast<char>(c >= 'A' && c <= 'Z' ? c + 32 : c);
  const bool bracketed = lower.size() >= 2 && ((lower.front() == '[' && lower.back() == ']') ||
                                               (lower.front() == '(' && lower.back() == ')'));
  return lower.empty() || bracketed || std::find(units.begin(), units.end(), lower) != units.end();
}

bool is_units_row(const SampleRow& row) {
  return !row.comment && std::all_of(row.cells.begin(), row.cells.end(),
                                     [](const std::string& cell) { return is_unit(cell); });
}

// The names of a header for `columns` columns; none if it does not fit. A delimiter at the end of
// the header or of the rows only is forgiven.
std::vector<std::string> fitting_names(std::vector<std::string> names, const Trial& trial,
                                       const SampleRow& data) {
  if (names.size() + 1 == trial.columns && data.cells.back().empty()) names.emplace_back();
  if (names.size() == trial.columns + 1 && names.back().empty()) names.pop_back();
  const bool nameless =
      std::all_of(names.begin(), names.end(), [](const std::string& name) { return name.empty(); });
  if (names.size() != trial.columns || nameless) return {};
  return names;
}

std::vector<std::string> comment_names(const SampleRow& comment, const Trial& trial) {
  std::string_view text = trimmed(comment.raw);
  text.remove_prefix(std::min(text.find_first_not_of('#'), text.size()));
  text = trimmed(text);
  if (text.empty()) return {};
  const io::Record record = io::read_record(text, 0, trial.delimiter);
  std::vector<std::string> names;
  for (const std::string& cell : record.cells) {
    names.emplace_back(trimmed(cell));
    if (classify(cell, trial.delimiter) == CellClass::value) return {};
  }
  const bool sentence = names.size() == 1 && names[0].find(' ') != std::string::npos;
  return sentence ? std::vector<std::string>{} : names;
}

// Looks upward from the first data row for its header.
void find_header(TextFormat& format, const Trial& trial, std::size_t data) {
  std::size_t at = data;
  const auto step_up = [&] {
    while (at > 0 && trial.rows[at - 1].comment) --at;
    return at > 0 ? &trial.rows[--at] : nullptr;
  };
  const SampleRow* row = step_up();
  const SampleRow* units = nullptr;
  if (row != nullptr && row->cells.size() == trial.columns && is_units_row(*row)) {
    const std::size_t units_at = at;
    const SampleRow* const above = step_up();
    if (above != nullptr && !fitting_names(above->cells, trial, trial.rows[data]).empty()) {
      units = row;
      row = above;
    } else {
      at = units_at;
    }
  }
  if (row != nullptr) {
    format.names = fitting_names(row->cells, trial, trial.rows[data]);
    format.has_header = !format.names.empty();
  }
  if (format.has_header) {
    format.layout.header = row->raw;
    if (units != nullptr) format.layout.units = units->raw;
    if (units != nullptr) format.units_row = units->raw;
  }
}

void find_comment_header(TextFormat& format, const Trial& trial, std::size_t data) {
  if (data == 0 || !trial.rows[data - 1].comment) return;
  const SampleRow& comment = trial.rows[data - 1];
  format.names = fitting_names(comment_names(comment, trial), trial, trial.rows[data]);
  format.has_header = format.header_in_comment = !format.names.empty();
  if (format.has_header) format.layout.header = comment.raw;
}

[[noreturn]] void refuse_without_data(const Trial& trial, const std::string& path) {
  const SampleRow* const first = first_row(trial);
  const int line = first ? static_cast<int>(first->line) : 1;
  const auto rows = std::count_if(trial.rows.begin(), trial.rows.end(),
                                  [](const SampleRow& row) { return !row.comment; });
  if (rows <= 1)
    throw core::InputError({path, line}, "the log holds a header at most, but no row of readings",
                           "check the logger's card");
  throw core::InputError({path, line}, "no row of numbers in the first lines",
                         "name a log of rows of numbers, delimited by comma, semicolon, tab or "
                         "blanks");
}

}  // namespace

TextFormat sniff_text_log(std::string_view text, const std::string& path) {
  // A card that was laid out in advance leaves zeros behind a log that was cut off.
  text = text.substr(0, text.find_last_not_of('\0') + 1);
  TextFormat format;
  const std::size_t begin = check_encoding(text, path);
  format.byte_order_mark = begin > 0;
  const Trial trial = choose_trial(text, begin, path);
  const std::vector<bool> of_values = value_columns(trial, text.back() != '\n');
  const auto data = std::find_if(trial.rows.begin(), trial.rows.end(), [&](const SampleRow& row) {
    return is_data(row, trial, of_values);
  });
  if (data == trial.rows.end()) refuse_without_data(trial, path);
  const auto at = static_cast<std::size_t>(data - trial.rows.begin());
  format.layout = {trial.delimiter, decimal_mark(trial), trial.columns, data->begin};
  format.data_line = data->line;
  find_header(format, trial, at);
  if (!format.has_header) find_comment_header(format, trial, at);
  format.names.resize(trial.columns);
  for (std::string& name : format.names) name = core::as_utf8(name);
  for (std::size_t i = 0; i < at; ++i)
    ++(trial.rows[i].comment ? format.comment_lines : format.preamble_lines);
  if (format.has_header && !format.header_in_comment) --format.preamble_lines;
  if (!format.units_row.empty()) --format.preamble_lines;
  const std::size_t line_end = text.find('\n', data->begin);
  format.crlf = line_end != std::string_view::npos && line_end > 0 && text[line_end - 1] == '\r';
  return format;
}

}  // namespace clickwise::logs
