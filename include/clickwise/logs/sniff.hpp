// How a delimited text log is written, told from its first lines.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/io/delimited.hpp"

namespace clickwise::logs {

struct TextFormat {
  io::TextLayout layout;  // its header points into the text that was sniffed
  bool has_header = false;
  bool header_in_comment = false;  // the last '#' line in front of the data holds the names
  bool byte_order_mark = false;
  bool crlf = false;
  std::vector<std::string> names;  // one per column, trimmed, as UTF-8 (core/utf8.hpp);
                                   // all empty without a header
  long long data_line = 1;         // where the first row stands, counted from 1; 0: no text
  std::string units_row;           // a line of units between header and data, as written
  int comment_lines = 0;           // in front of the data
  int preamble_lines = 0;          // other lines in front of header and data
};

// Looks at the lines at the start of the text (at most 1 MiB and 200 rows). Told apart: comma,
// semicolon, tab or blanks; decimal comma where the delimiter is no comma; a header, plain or in
// the last comment line, or none; preambles; a row of units. Throws core::InputError naming `path`
// and line: empty, UTF-16, not text, lines ended by bare carriage returns, a line that does not
// end within 1 MiB, only a header.
TextFormat sniff_text_log(std::string_view text, const std::string& path);

// Which column the bike file means, counted from 0. Throws core::InputError: a number beyond the
// columns, a name that two columns have (says to use the number), a name that is not there (lists
// those that are, and the nearest).
std::size_t find_column(const TextFormat& format, const bike::ColumnRef& column,
                        const std::string& path);

// The header's name of a column counted from 0, or its number counted from 1.
std::string column_label(const TextFormat& format, std::size_t column);

// "comma", "semicolon", "tab" or "blanks".
std::string_view delimiter_name(char delimiter);

}  // namespace clickwise::logs
