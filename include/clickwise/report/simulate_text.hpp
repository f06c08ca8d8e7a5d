// The `simulate` command's result as terminal text.
#pragma once

#include <string>

#include "clickwise/workflow/simulate.hpp"

namespace clickwise::report {

std::string simulate_text(const workflow::SimulateResult& result);

}  // namespace clickwise::report
