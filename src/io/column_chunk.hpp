// Parses the wanted columns of one run of whole lines.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "clickwise/io/delimited.hpp"

namespace clickwise::io {

// A wanted column and where its values go; sorted by index.
struct Target {
  std::size_t index = 0;
  CellKind kind = CellKind::number;
  double* values = nullptr;
};

struct UnreadCells {
  std::size_t empty = 0;
  std::size_t unreadable = 0;
  std::string example;
};

struct ChunkResult {
  std::size_t rows = 0;
  std::vector<UnreadCells> unread;          // per target
  std::vector<MalformedRows> malformed;     // rows counted from the chunk's first
  std::vector<std::size_t> header_repeats;  // likewise
  bool open_quote = false;                  // a quoted cell goes on behind its line: nothing holds
};

struct ChunkSettings {
  std::string_view text;  // the whole of it, so that reading a little past a cell is allowed
  TextLayout layout;
  ColumnsOptions options;
  bool line_ends_in_quotes = false;  // only where the chunk is all there is
};

// Rows that begin in [begin, end); their values go to targets[k].values[0 ...].
ChunkResult parse_chunk(const ChunkSettings& settings, const std::vector<Target>& targets,
                        std::size_t begin, std::size_t end);

}  // namespace clickwise::io
