// A review as text for a terminal: what to turn first, then what it rests on.
#pragma once

#include <string>

#include "clickwise/workflow/review.hpp"

namespace clickwise::report {

struct TextStyle {
  bool emphasis = false;  // bold headings by ANSI codes; only for a terminal
};

std::string review_text(const workflow::Review& review, const TextStyle& style = {});

}  // namespace clickwise::report
