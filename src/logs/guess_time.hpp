// Which column of a log is the time.
#pragma once

#include <optional>
#include <vector>

#include "clickwise/logs/facts.hpp"

namespace clickwise::logs {

// How far a column behaves like a clock.
struct Advance {
  double rising_share = 0.0;  // steps that are 0 or more, of all; 0 for fewer than 2 readings
  double typical_step = 0.0;  // rough_interval()
};

// The likeliest column: by name and by rising, then by rising alone with a plausible rate.
std::optional<TimeGuess> guess_time(const std::vector<ColumnFacts>& columns,
                                    const std::vector<Advance>& advances);

}  // namespace clickwise::logs
