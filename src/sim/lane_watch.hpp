// Bottom-outs and top-outs of one lane, looked for only where its travel comes near an end.
#pragma once

#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/sim/lanes.hpp"
#include "lane_kernel.hpp"

namespace clickwise::sim {

struct StopEvents {
  std::vector<run::EndStop> bottom_outs;
  std::vector<run::EndStop> top_outs;
};

// Contract section 1; the crossing lies straight between samples. Excursions go on from chunk to
// chunk until `interrupt`.
class LaneWatch {
public:
  explicit LaneWatch(const TallyPlan& plan);

  StopEvents see(const LaneChunk& chunk, std::size_t lane, std::size_t from, std::size_t to,
                 std::size_t first_sample, double least_m, double most_m);

  // What follows does not continue what was seen.
  void interrupt() { continues_ = false; }

private:
  struct Line {
    double sign, level_m, rearm_m, least_m_s;
    bool armed = true;
  };
  void look(Line& line, double t_s, double x, double v, std::vector<run::EndStop>& found) const;

  double interval_s_;
  Line bottom_;
  Line top_;
  bool continues_ = false;
  double last_x_ = 0.0;
  double last_v_ = 0.0;
};

}  // namespace clickwise::sim
