// The `damper` command's result, as terminal text and as JSON ("clickwise-damper-1").
#pragma once

#include <string>

#include "clickwise/workflow/damper_table.hpp"

namespace clickwise::report {

std::string damper_text(const workflow::DamperReport& report);
std::string damper_json(const workflow::DamperReport& report);

}  // namespace clickwise::report
