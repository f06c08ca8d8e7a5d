// The change of a figure and its bounds, from the ensemble.
#pragma once

#include <vector>

#include "replay_figures.hpp"

namespace clickwise::sim {

// Figures by setting, the ride's own first: of the whole ride with the bike as it is written, and
// of the draws [draw][setting] over the pieces that all draws rode.
struct EnsembleFigures {
  std::vector<LaneFigures> whole;
  std::vector<std::vector<LaneFigures>> draws;
  double whole_over_pieces = 1.0;  // seconds over seconds; for counts and joules
};

Change change_of(Metric metric, const EnsembleFigures& figures, std::size_t setting,
                 const EndFigures& recorded);

}  // namespace clickwise::sim
