// The `import` command's result as terminal text.
#pragma once

#include <string>

#include "clickwise/workflow/import_run.hpp"

namespace clickwise::report {

std::string import_text(const workflow::Import& result);

}  // namespace clickwise::report
