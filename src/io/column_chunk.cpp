#include "column_chunk.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "clickwise/io/number.hpp"
#include "clickwise/io/timestamp.hpp"
#include "fast_decimal.hpp"
#include "quoted_cell.hpp"
#include "separator_scanner.hpp"

namespace clickwise::io {

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();
constexpr std::size_t readable_past_cell = 17;  // what fast_decimal may touch
constexpr std::size_t most_stray_quotes = 100;  // then line ends in quotes are given up
constexpr std::size_t longest_example = 24;

bool is_blank(char c) {
  return c == ' ' || c == '\t' || c == '\r';
}

class ChunkParser {
public:
  ChunkParser(const ChunkSettings& settings, const std::vector<Target>& targets)
      : settings_(settings),
        targets_(targets),
        text_end_(settings.text.data() + settings.text.size()),
        scanner_(text_end_, settings.layout.delimiter,
                 settings.layout.delimiter == ' ' ? '\t' : settings.layout.delimiter),
        first_(targets.size()),
        last_(targets.size()) {
    result_.unread.resize(targets.size());
    for (const char c : {'#', ' ', '\t', '\r', '\n'})
      special_[static_cast<unsigned char>(c)] = true;
    for (const std::string_view line : {settings.layout.header, settings.layout.units})
      if (!line.empty()) special_[static_cast<unsigned char>(line.front())] = true;
  }

  ChunkResult parse(std::size_t begin, std::size_t end) {
    const char* at = settings_.text.data() + begin;
    const char* const chunk_end = settings_.text.data() + end;
    scanner_.start_at(at);
    const bool aligned = settings_.layout.delimiter == ' ';
    while (at < chunk_end && !result_.open_quote) {
      if (special_[static_cast<unsigned char>(*at)]) {
        const char* const behind = skip_special_line(at);
        if (behind != at) {
          at = behind;
          scanner_.start_at(at);
          continue;
        }
      }
      at = aligned ? parse_row<true>(at) : parse_row<false>(at);
    }
    return std::move(result_);
  }

private:
  const char* line_end(const char* at) const {
    const void* const found = std::memchr(at, '\n', static_cast<std::size_t>(text_end_ - at));
    return found ? static_cast<const char*>(found) : text_end_;
  }

  const char* behind_line(const char* at) const { return std::min(line_end(at) + 1, text_end_); }

  // Behind a line that is a comment, blank, or the header once more; `at` itself for a row.
  const char* skip_special_line(const char* at) {
    if (repeats(settings_.layout.header, at)) {
      result_.header_repeats.push_back(result_.rows);
      return behind_line(at + settings_.layout.header.size());
    }
    if (repeats(settings_.layout.units, at)) return behind_line(at + settings_.layout.units.size());
    const char* first = at;
    while (first < text_end_ && is_blank(*first)) ++first;
    if (first == text_end_ || *first == '\n') return skip_blank_line(at, first);
    return *first == '#' ? behind_line(first) : at;
  }

  const char* skip_blank_line(const char* at, const char* line_end) {
    const bool tabs_are_cells =
        settings_.layout.delimiter == '\t' && std::find(at, line_end, '\t') != line_end;
    if (tabs_are_cells) return at;
    if (settings_.layout.columns == 1) finish_malformed_row();
    return std::min(line_end + 1, text_end_);
  }

  bool repeats(std::string_view line, const char* at) const {
    if (line.empty()) return false;
    const std::string_view rest(at, static_cast<std::size_t>(text_end_ - at));
    if (!rest.starts_with(line)) return false;
    return rest.size() == line.size() || rest[line.size()] == '\n' || rest[line.size()] == '\r';
  }

  // Reads the row that begins at `at`; returns the byte behind it.
  template <bool aligned>
  const char* parse_row(const char* at) {
    constexpr std::size_t none = std::numeric_limits<std::size_t>::max();
    const char* cell = at;
    std::size_t column = 0;
    std::size_t target = 0;
    std::size_t next_wanted = targets_.empty() ? none : targets_.front().index;
    for (;;) {
      const char* const mark = scanner_.next();
      const bool ends_row = mark == text_end_ || *mark == '\n';
      if (!ends_row && *mark == '"') return parse_quoted_row(at);
      const char* cell_end = mark;
      if (ends_row && cell_end > cell && cell_end[-1] == '\r') --cell_end;
      if (!aligned || cell_end > cell) {
        while (column == next_wanted) {
          first_[target] = cell;
          last_[target] = cell_end;
          ++target;
          next_wanted = target < targets_.size() ? targets_[target].index : none;
        }
        ++column;
      }
      cell = mark + 1;
      if (ends_row) {
        if (column == settings_.layout.columns)
          store_row();
        else
          finish_malformed_row();
        return std::min(mark + 1, text_end_);
      }
    }
  }

  void store_row() {
    for (std::size_t k = 0; k < targets_.size(); ++k) {
      double value = 0.0;
      const bool plain = targets_[k].kind == CellKind::number && last_[k] > first_[k] &&
                         static_cast<std::size_t>(text_end_ - first_[k]) >= readable_past_cell &&
                         fast_decimal(first_[k], last_[k], settings_.layout.point, value);
      if (!plain) {
        const auto length = static_cast<std::size_t>(last_[k] - first_[k]);
        value = read_cell(k, {first_[k], length});
      }
      targets_[k].values[result_.rows] = value;
    }
    ++result_.rows;
  }

  double read_cell(std::size_t k, std::string_view cell) {
    const double value = targets_[k].kind == CellKind::timestamp
                             ? parse_timestamp(cell, settings_.options.epoch_s)
                             : parse_number(cell, settings_.layout.point);
    if (std::isnan(value)) note_unread(result_.unread[k], cell);
    return value;
  }

  static void note_unread(UnreadCells& unread, std::string_view cell) {
    if (std::all_of(cell.begin(), cell.end(), is_blank)) {
      ++unread.empty;
      return;
    }
    if (unread.unreadable++ == 0) unread.example = cell.substr(0, longest_example);
  }

  void finish_malformed_row() {
    auto& runs = result_.malformed;
    const bool joins =
        !runs.empty() && !settings_.options.keep_malformed_rows && runs.back().row == result_.rows;
    if (joins)
      ++runs.back().count;
    else
      runs.push_back({result_.rows, 1});
    if (!settings_.options.keep_malformed_rows) return;
    for (const Target& target : targets_) target.values[result_.rows] = not_a_number;
    ++result_.rows;
  }

  // A row with a quote in it: at leisure, by the rules of read_record().
  const char* parse_quoted_row(const char* at) {
    const std::string_view text = settings_.text;
    const char* const end_of_line = line_end(at);
    const auto begin = static_cast<std::size_t>(at - text.data());
    const std::string_view line = text.substr(
        0, std::min(static_cast<std::size_t>(end_of_line - text.data()) + 1, text.size()));
    const bool whole_text = settings_.line_ends_in_quotes && stray_quotes_ < most_stray_quotes;
    if (!settings_.line_ends_in_quotes && quote_stays_open(begin)) {
      result_.open_quote = true;
      return text_end_;
    }
    const Record record = read_record(whole_text ? text : line, begin, settings_.layout.delimiter);
    if (whole_text && record.end == line.size() && quote_stays_open(begin)) ++stray_quotes_;
    if (record.cells.size() == settings_.layout.columns)
      store_record(record);
    else
      finish_malformed_row();
    scanner_.start_at(text.data() + record.end);
    return text.data() + record.end;
  }

  bool quote_stays_open(std::size_t begin) const {
    const std::string_view text = settings_.text;
    const char delimiter = settings_.layout.delimiter;
    bool cell_begins = true;
    for (std::size_t at = begin; at < text.size() && text[at] != '\n';) {
      if (text[at] == '"' && cell_begins) {
        const QuotedCell cell = read_quoted_cell(text, at, delimiter, false);
        if (!cell.closed) return cell.open_at_line_end;
        at = cell.end;
        cell_begins = false;
        continue;
      }
      const bool blank = text[at] == ' ' || text[at] == '\t';
      cell_begins = text[at] == delimiter || (blank && (cell_begins || delimiter == ' '));
      ++at;
    }
    return false;
  }

  void store_record(const Record& record) {
    for (std::size_t k = 0; k < targets_.size(); ++k)
      targets_[k].values[result_.rows] = read_cell(k, record.cells[targets_[k].index]);
    ++result_.rows;
  }

  const ChunkSettings& settings_;
  const std::vector<Target>& targets_;
  const char* text_end_;
  SeparatorScanner scanner_;
  std::vector<const char*> first_;
  std::vector<const char*> last_;
  std::array<bool, 256> special_{};
  std::size_t stray_quotes_ = 0;
  ChunkResult result_;
};

}  // namespace

ChunkResult parse_chunk(const ChunkSettings& settings, const std::vector<Target>& targets,
                        std::size_t begin, std::size_t end) {
  return ChunkParser(settings, targets).parse(begin, end);
}

}  // namespace clickwise::io
