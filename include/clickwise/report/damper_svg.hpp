// The `damper` command's drawing: the family of curves across each adjuster, as SVG.
#pragma once

#include <string>

#include "clickwise/workflow/damper_table.hpp"

namespace clickwise::report {

// One panel an adjuster, force over speed, one line a setting: told apart by dashes and by numbers at
// their ends, so that it prints in black and white. SVG 1.1 without script or outside parts.
std::string damper_svg(const workflow::DamperReport& report);

}  // namespace clickwise::report
