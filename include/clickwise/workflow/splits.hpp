// The speeds that part low from high, as a user asks for them.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::workflow {

// What `--split` asked for, for every end and direction; empty where nothing was asked.
struct SplitRequest {
  bike::Split front;
  bike::Split rear;

  const bike::Split& end(bike::EndName name) const {
    return name == bike::EndName::front ? front : rear;
  }
};

// From texts "SPEED" or "END.DIRECTION=SPEED" with SPEED in mm/s, above 0 and at most 20000; a
// later one overrules an earlier one. Throws core::InputError for anything else.
SplitRequest parse_splits(const std::vector<std::string>& texts);

}  // namespace clickwise::workflow
