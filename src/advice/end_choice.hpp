// What is chosen for one end.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/advice/advise.hpp"

namespace clickwise::advice {

struct EndChoice {
  std::optional<Step> step;
  std::vector<Handover> handovers;
  std::string check;  // what about the bike file cannot be right; then there is nothing else
};

}  // namespace clickwise::advice
