// One quoted cell of a record.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace clickwise::io {

struct QuotedCell {
  std::string content;            // without the quotes, doubled ones made single
  std::size_t end = 0;            // byte behind the closing quote and blanks behind that
  bool closed = false;            // a delimiter, a line end or the end of the text follows
  bool open_at_line_end = false;  // `line_ends` is false and the cell goes on behind the line
};

// The cell whose opening quote is at byte `open`. Gives up (not closed) behind longest_quoted_cell.
QuotedCell read_quoted_cell(std::string_view text, std::size_t open, char delimiter,
                            bool line_ends);

}  // namespace clickwise::io
