// The change of a figure and its bounds, from the ensemble.
#pragma once

#include <vector>

#include "replay_figures.hpp"

namespace clickwise::sim {

// Of setting `setting` (0: the ride's own) over figures[draw][setting].
Change change_of(Metric metric, const std::vector<std::vector<LaneFigures>>& figures,
                 std::size_t setting, const ReplayResult& result);

}  // namespace clickwise::sim
