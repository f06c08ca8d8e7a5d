// From a lane's tally to the figures of a replay.
#pragma once

#include <array>
#include <vector>

#include "clickwise/sim/replay.hpp"

namespace clickwise::sim {

EndFigures end_figures(Tally tally, const TallyPlan& plan);

// A lane's metrics; its whole figures; and, where it is kept, what each block of the ride adds to
// each metric beyond its share of the riding time.
struct LaneFigures {
  std::array<double, metrics> values{};
  EndFigures whole;
  std::vector<std::array<double, metrics>> influence;
};

LaneFigures lane_figures(Tally tally, const TallyPlan& plan, bool keep);

}  // namespace clickwise::sim
