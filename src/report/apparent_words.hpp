// The damper as ridden, in words and as a table.
#pragma once

#include <string>
#include <vector>

#include "clickwise/sim/apparent.hpp"

namespace clickwise::report {

struct ApparentTable {
  std::vector<std::string> head;
  std::vector<std::vector<std::string>> rows;  // one a speed
  std::vector<std::string> sentences;          // friction, agreement, fade
};

// Of a damper without a problem.
ApparentTable apparent_table(const sim::ApparentDamper& damper);

// Lines for a terminal; none where there is a problem (the notes say it).
std::vector<std::string> apparent_words(const sim::ApparentDamper& damper);

}  // namespace clickwise::report
