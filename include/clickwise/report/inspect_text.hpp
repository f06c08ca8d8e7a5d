// The `inspect` command's result as terminal text.
#pragma once

#include <string>

#include "clickwise/workflow/inspect.hpp"

namespace clickwise::report {

std::string inspect_text(const workflow::Inspection& inspection);

}  // namespace clickwise::report
