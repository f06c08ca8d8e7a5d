// Whether the last line of a text was cut off by a logger that lost power.
#pragma once

#include <cstddef>
#include <string_view>

#include "clickwise/io/delimited.hpp"

namespace clickwise::io {

struct LastLine {
  std::size_t begin = 0;
  bool cut = false;
};

// Only a line without a line end can be cut; see read_columns() for the rule.
LastLine judge_last_line(std::string_view text, const TextLayout& layout);

}  // namespace clickwise::io
