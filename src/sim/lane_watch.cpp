#include "lane_watch.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace clickwise::sim {

namespace {

constexpr double least_rearm_m = 0.015;  // contract section 1
constexpr double rearm_withins = 4.0;

double rearm_distance_m(double within_m) {
  return std::max(rearm_withins * within_m, least_rearm_m);
}

}  // namespace

LaneWatch::LaneWatch(const TallyPlan& plan)
    : interval_s_(plan.interval_s),
      bottom_{.sign = 1.0,
              .level_m = plan.stroke_m - plan.bottom_out_within_m,
              .rearm_m = plan.stroke_m - rearm_distance_m(plan.bottom_out_within_m),
              .least_m_s = -std::numeric_limits<double>::infinity()},
      top_{.sign = -1.0,
           .level_m = -plan.top_out_within_m,
           .rearm_m = -rearm_distance_m(plan.top_out_within_m),
           .least_m_s = plan.top_out_least_m_s} {}

void LaneWatch::look(Line& line, double t_s, double x, double v,
                     std::vector<run::EndStop>& found) const {
  const double now = line.sign * x;
  if (line.armed && now >= line.level_m) {
    line.armed = false;
    const double before = line.sign * last_x_;
    if (continues_ && before < line.level_m) {
      const double part = (line.level_m - before) / (now - before);
      const double speed = line.sign * (last_v_ + part * (v - last_v_));
      if (speed >= line.least_m_s)
        found.push_back({.t_s = t_s - (1.0 - part) * interval_s_,
                         .depth_m = x,
                         .closing_speed_m_s = line.sign * speed});
    }
  }
  if (line.armed) return;
  if (!found.empty() && line.sign * found.back().depth_m < now) found.back().depth_m = x;
  line.armed = now < line.rearm_m;
}

StopEvents LaneWatch::see(const LaneChunk& chunk, std::size_t lane, std::size_t from,
                          std::size_t to, std::size_t first_sample, double least_m, double most_m) {
  StopEvents found;
  const bool near_bottom = !bottom_.armed || most_m >= bottom_.level_m;
  const bool near_top = !top_.armed || -least_m >= top_.level_m;
  for (std::size_t i = from; i < to && (near_bottom || near_top); ++i) {
    const double t_s = static_cast<double>(first_sample + i) * interval_s_;
    const double x = chunk.travel_m[i].at[lane];
    const double v = chunk.velocity_m_s[i].at[lane];
    if (near_bottom) look(bottom_, t_s, x, v, found.bottom_outs);
    if (near_top) look(top_, t_s, x, v, found.top_outs);
    continues_ = true;
    last_x_ = x;
    last_v_ = v;
  }
  continues_ = true;
  last_x_ = chunk.travel_m[to - 1].at[lane];
  last_v_ = chunk.velocity_m_s[to - 1].at[lane];
  return found;
}

}  // namespace clickwise::sim
