// Delimited text: single records by RFC 4180, and whole columns of numbers at the speed of memory.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace clickwise::io {

// How the rows of a file are written.
struct TextLayout {
  char delimiter = ',';          // ' ' stands for runs of blanks and tabs
  char point = '.';              // decimal mark, '.' or ','
  std::size_t columns = 1;       // cells of a row
  std::size_t data_begin = 0;    // byte at which the first row begins
  std::string_view header = {};  // the header as written, without its line end; empty if none
  std::string_view units = {};   // likewise a line of units behind the header
};

// One record: its cells, and the byte behind its line end.
struct Record {
  std::vector<std::string> cells;  // unquoted; blanks around them are kept (RFC 4180 section 2.4)
  std::size_t end = 0;
};

// A quoted cell longer than this is taken for a stray quote.
inline constexpr std::size_t longest_quoted_cell = std::size_t{1} << 16U;

// The record that begins at byte `begin` (below text.size()). Quoted cells may hold delimiters,
// doubled quotes and line ends (RFC 4180 section 2, items 5 to 7); blanks around the quotes are
// dropped. Where quoting is broken, the line alone is split at its delimiters. O(length).
Record read_record(std::string_view text, std::size_t begin, char delimiter);

// The cell as RFC 4180 wants it written: quoted where it holds a delimiter, a quote or a line end.
std::string quoted_cell(std::string_view cell, char delimiter = ',');

enum class CellKind { number, timestamp };

struct WantedColumn {
  std::size_t index = 0;  // counted from 0, below the layout's columns
  CellKind kind = CellKind::number;
};

struct ColumnsOptions {
  std::size_t chunk_bytes = 0;  // text that one job parses; 0: by the file's size and the cores
  bool keep_malformed_rows = false;  // as rows of NaN, where their place in the count is the clock
  double epoch_s = 0.0;              // taken off time stamps, io/timestamp.hpp
};

// Cells of one column, one per row, and what could not be read of them.
struct Column {
  std::vector<double> values;   // NaN where the cell is no number
  std::size_t empty_cells = 0;  // nothing or blanks
  std::size_t unreadable_cells = 0;
  std::string unreadable_example;  // the first of them, shortened
};

// `count` rows of a wrong number of cells in front of row `row`.
struct MalformedRows {
  std::size_t row = 0;
  std::size_t count = 0;
};

struct Columns {
  std::size_t rows = 0;                  // values in each column
  std::size_t whole_rows = 0;            // of them, those with the right number of cells
  std::vector<Column> columns;           // in the order asked for
  std::vector<MalformedRows> malformed;  // by row; with keep_malformed_rows, that row is the first
  std::vector<std::size_t> header_repeats;  // rows in front of which the header stands once more
  bool truncated = false;                   // the last line was cut off and is not among the rows
  std::size_t malformed_rows() const;
};

// All rows from layout.data_begin on. Lines that begin with '#', the header or the units once more,
// and blank lines are no rows (in a
// text of one column a blank line is a malformed row, as it stands for a lost cell, unless it is at
// the end). A last line without a line end is a row if it has all its cells and the last one is not
// shorter, does not have fewer decimals, and does not jump further than in the 64 rows before it;
// otherwise it is taken as cut off. The result does not depend on chunk_bytes. Memory beyond the
// result: none that grows with the text. O(text), on all cores unless quotes hold line ends.
Columns read_columns(std::string_view text, const TextLayout& layout,
                     const std::vector<WantedColumn>& wanted, const ColumnsOptions& options = {});

}  // namespace clickwise::io
