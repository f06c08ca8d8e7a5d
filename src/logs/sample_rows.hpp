// The first lines of a text log, split at a delimiter that is being tried.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace clickwise::logs {

enum class CellClass { empty, value, text };

struct SampleRow {
  std::vector<std::string> cells;  // trimmed; empty for a comment
  std::string_view raw;            // as written, without its line end
  std::size_t begin = 0;
  long long line = 1;
  bool comment = false;
};

// Up to 200 rows and the comments among them; blank lines are left out. Throws core::InputError for
// a line that does not end within 1 MiB.
std::vector<SampleRow> sample_rows(std::string_view text, std::size_t begin, char delimiter,
                                   const std::string& path);

// A number with either decimal mark (only '.' where the delimiter is a comma), "nan", "inf", or a
// time stamp is a value.
CellClass classify(std::string_view cell, char delimiter);

std::string_view trimmed(std::string_view text);

}  // namespace clickwise::logs
