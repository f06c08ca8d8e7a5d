// What is chosen for one end.
#pragma once

#include <optional>
#include <vector>

#include "clickwise/advice/advise.hpp"

namespace clickwise::advice {

struct EndChoice {
  std::optional<Step> step;
  std::vector<Handover> handovers;
};

}  // namespace clickwise::advice
