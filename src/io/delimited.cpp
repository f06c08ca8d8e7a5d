#include "clickwise/io/delimited.hpp"

#include <algorithm>
#include <array>
#include <cstdint>
#include <cstring>
#include <numeric>

#include "clickwise/core/parallel.hpp"
#include "column_chunk.hpp"
#include "last_line.hpp"

namespace clickwise::io {

namespace {

constexpr std::size_t smallest_chunk = std::size_t{1} << 16U;
constexpr std::size_t chunks_per_core = 8;

struct Chunk {
  std::size_t begin = 0;
  std::size_t end = 0;
  std::size_t first_row = 0;  // room for its rows begins here
};

// Chunks end behind line ends. A line longer than a chunk makes its chunk longer, and is searched
// for its end once.
std::vector<Chunk> cut_at_lines(std::string_view text, std::size_t begin, std::size_t size) {
  std::vector<Chunk> chunks;
  while (begin < text.size()) {
    std::size_t end = text.size();
    if (text.size() - begin > size) {
      const std::size_t mark = text.find('\n', begin + size - 1);
      end = mark == std::string_view::npos ? text.size() : mark + 1;
    }
    chunks.push_back({begin, end, 0});
    begin = end;
  }
  return chunks;
}

// In bytes side by side, which the compiler turns into vectors; std::count works in wide counters.
std::size_t count_line_ends(std::string_view text) {
  constexpr std::size_t lanes = 16;
  constexpr std::size_t block = 255 * lanes;  // a byte's worth in each lane
  std::size_t sum = 0;
  for (; text.size() >= block; text.remove_prefix(block)) {
    std::array<std::uint8_t, lanes> counts{};
    for (std::size_t i = 0; i < block; i += lanes)
      for (std::size_t k = 0; k < lanes; ++k)
        counts[k] = static_cast<std::uint8_t>(counts[k] + (text[i + k] == '\n'));
    for (const std::uint8_t count : counts) sum += count;
  }
  return sum + static_cast<std::size_t>(std::count(text.begin(), text.end(), '\n'));
}

std::size_t count_lines(std::string_view text) {
  return count_line_ends(text) + (!text.empty() && text.back() != '\n' ? 1 : 0);
}

// Gives each chunk room for as many rows as it has lines; returns the room in all.
std::size_t lay_out_rows(std::string_view text, std::vector<Chunk>& chunks) {
  std::vector<std::size_t> lines(chunks.size());
  core::parallel_for(chunks.size(), [&](std::size_t i) {
    lines[i] = count_lines(text.substr(chunks[i].begin, chunks[i].end - chunks[i].begin));
  });
  std::size_t rows = 0;
  for (std::size_t i = 0; i < chunks.size(); ++i) {
    chunks[i].first_row = rows;
    rows += lines[i];
  }
  return rows;
}

std::size_t chosen_chunk_size(std::size_t text_size, std::size_t asked) {
  if (asked > 0) return asked;
  return std::max(smallest_chunk, text_size / (core::worker_count() * chunks_per_core) + 1);
}

// The order of the wanted columns by their place in a row.
std::vector<std::size_t> by_index(const std::vector<WantedColumn>& wanted) {
  std::vector<std::size_t> order(wanted.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::stable_sort(order.begin(), order.end(),
                   [&](std::size_t a, std::size_t b) { return wanted[a].index < wanted[b].index; });
  return order;
}

class Reading {
public:
  Reading(const ChunkSettings& settings, const std::vector<WantedColumn>& wanted)
      : settings_(settings), wanted_(wanted), order_(by_index(wanted)) {}

  // False where a quoted cell holds a line end and the text has to be read in one piece.
  bool read(std::vector<Chunk> chunks) {
    const std::size_t room = lay_out_rows(settings_.text, chunks);
    columns_.columns.resize(wanted_.size());
    core::parallel_for(wanted_.size(),
                       [&](std::size_t k) { columns_.columns[k].values.resize(room); });
    std::vector<ChunkResult> results(chunks.size());
    core::parallel_for(chunks.size(), [&](std::size_t i) {
      results[i] =
          parse_chunk(settings_, targets(chunks[i].first_row), chunks[i].begin, chunks[i].end);
    });
    for (const ChunkResult& result : results)
      if (result.open_quote) return false;
    for (std::size_t i = 0; i < chunks.size(); ++i) append(results[i], chunks[i].first_row);
    for (Column& column : columns_.columns) column.values.resize(columns_.rows);
    return true;
  }

  Columns take() { return std::move(columns_); }

private:
  std::vector<Target> targets(std::size_t first_row) {
    std::vector<Target> targets;
    for (const std::size_t k : order_)
      targets.push_back(
          {wanted_[k].index, wanted_[k].kind, columns_.columns[k].values.data() + first_row});
    return targets;
  }

  // Closes the hole that lines which were no rows have left in front of the chunk's values.
  void append(const ChunkResult& result, std::size_t first_row) {
    const std::size_t row = columns_.rows;
    for (std::size_t i = 0; i < order_.size(); ++i) {
      Column& column = columns_.columns[order_[i]];
      double* const values = column.values.data();
      if (first_row != row && result.rows > 0)
        std::memmove(values + row, values + first_row, result.rows * sizeof(double));
      const UnreadCells& unread = result.unread[i];
      if (column.unreadable_cells == 0) column.unreadable_example = unread.example;
      column.empty_cells += unread.empty;
      column.unreadable_cells += unread.unreadable;
    }
    for (const MalformedRows& run : result.malformed) append_malformed({row + run.row, run.count});
    for (const std::size_t repeat : result.header_repeats)
      columns_.header_repeats.push_back(row + repeat);
    columns_.rows += result.rows;
  }

  void append_malformed(const MalformedRows& run) {
    auto& runs = columns_.malformed;
    if (!runs.empty() && runs.back().row == run.row)
      runs.back().count += run.count;
    else
      runs.push_back(run);
  }

  const ChunkSettings& settings_;
  const std::vector<WantedColumn>& wanted_;
  std::vector<std::size_t> order_;
  Columns columns_;
};

std::size_t without_blank_end(std::string_view text) {
  const std::size_t last = text.find_last_not_of(" \t\r\n");
  if (last == std::string_view::npos) return 0;
  const std::size_t line_end = text.find('\n', last);
  return line_end == std::string_view::npos ? text.size() : line_end + 1;
}

}  // namespace

std::size_t Columns::malformed_rows() const {
  std::size_t sum = 0;
  for (const MalformedRows& run : malformed) sum += run.count;
  return sum;
}

Columns read_columns(std::string_view text, const TextLayout& layout,
                     const std::vector<WantedColumn>& wanted, const ColumnsOptions& options) {
  const LastLine last = judge_last_line(text, layout);
  const std::size_t end =
      std::max(layout.data_begin, last.cut ? last.begin : without_blank_end(text));
  const ChunkSettings settings{text.substr(0, end), layout, options, false};
  const std::size_t size = chosen_chunk_size(text.size(), options.chunk_bytes);
  Reading reading(settings, wanted);
  Columns columns;
  if (reading.read(cut_at_lines(settings.text, layout.data_begin, size))) {
    columns = reading.take();
  } else {
    const ChunkSettings whole{settings.text, layout, options, true};
    Reading in_one_piece(whole, wanted);
    in_one_piece.read({{layout.data_begin, end, 0}});
    columns = in_one_piece.take();
  }
  columns.truncated = last.cut;
  columns.whole_rows = columns.rows - (options.keep_malformed_rows ? columns.malformed_rows() : 0);
  return columns;
}

}  // namespace clickwise::io
