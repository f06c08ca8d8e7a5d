#include "clickwise/sim/speed_plan.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace clickwise::sim {

namespace {

constexpr double push_m_s2 = 4.0;
constexpr double slowest_m_s = 0.3;
constexpr std::size_t most_samples = 10'000'000;

void require_room(const SpeedPlan& plan, std::size_t samples) {
  if (samples > most_samples)
    throw core::JobError(plan.place, "the ride has more than ten million samples",
                         "make it shorter or faster, or lower the logger's rate");
}

double planned_speed(const SpeedPlan& plan, double ridden_s, double distance_m) {
  const auto& points = plan.speed_m_s.x();
  const double at = plan.over_time ? ridden_s : distance_m;
  return plan.pace * plan.speed_m_s(std::clamp(at, points.front(), points.back()));
}

double speed_now(const SpeedPlan& plan, double ridden_s, double distance_m) {
  double limit = push_m_s2 * ridden_s;
  if (plan.length_m)
    limit =
        std::min(limit, std::sqrt(2.0 * push_m_s2 * std::max(0.0, *plan.length_m - distance_m)));
  if (plan.duration_s) limit = std::min(limit, push_m_s2 * (*plan.duration_s - ridden_s));
  const double wanted = planned_speed(plan, ridden_s, distance_m);
  return std::max(slowest_m_s, std::min(limit, wanted));
}

void stand(Progress& progress, double seconds, double rate_hz) {
  const double distance = progress.distance_m.empty() ? 0.0 : progress.distance_m.back();
  const auto samples = static_cast<std::size_t>(std::lround(seconds * rate_hz));
  progress.distance_m.insert(progress.distance_m.end(), samples, distance);
  progress.speed_m_s.insert(progress.speed_m_s.end(), samples, 0.0);
}

}  // namespace

Progress progress(const SpeedPlan& plan, double rate_hz) {
  Progress out;
  stand(out, plan.stand_before_s, rate_hz);
  const std::size_t begin = out.distance_m.size();
  const double end_m = plan.length_m.value_or(std::numeric_limits<double>::infinity());
  const double end_s = plan.duration_s.value_or(std::numeric_limits<double>::infinity());
  double distance = 0.0;
  for (std::size_t i = 0;; ++i) {
    const double ridden = static_cast<double>(i) / rate_hz;
    if (distance >= end_m || ridden >= end_s) break;
    require_room(plan, out.distance_m.size());
    const double speed = speed_now(plan, ridden, distance);
    out.distance_m.push_back(distance);
    out.speed_m_s.push_back(speed);
    distance += speed / rate_hz;
  }
  out.ride_begin_s = static_cast<double>(begin) / rate_hz;
  out.ride_end_s = static_cast<double>(out.distance_m.size()) / rate_hz;
  stand(out, plan.stand_after_s, rate_hz);
  require_room(plan, out.distance_m.size());
  return out;
}

}  // namespace clickwise::sim
