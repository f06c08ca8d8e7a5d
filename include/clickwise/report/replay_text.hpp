// The `replay` command's results as terminal text and as JSON ("clickwise-replay-1",
// "clickwise-map-1").
#pragma once

#include <string>

#include "clickwise/workflow/replay.hpp"

namespace clickwise::report {

std::string replay_text(const workflow::Replay& replay);
std::string replay_json(const workflow::Replay& replay);

std::string click_map_text(const workflow::ClickMap& map);
std::string click_map_json(const workflow::ClickMap& map);

}  // namespace clickwise::report
