// Dyno tables made from known dampers, with seeded noise.
#pragma once

#include <cmath>
#include <random>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/damper.hpp"

namespace clickwise::test {

struct DynoPlan {
  std::vector<double> speeds_m_s;
  std::vector<double> out{0.0, 0.5, 1.0};  // settings of each adjuster, as shares of its clicks
  double noise_share = 0.0;                // of the force, normal
  unsigned seed = 1;
};

// `count` speeds with equal ratios from `slowest` to `fastest`.
inline std::vector<double> even_speeds(std::size_t count, double slowest, double fastest) {
  std::vector<double> speeds;
  for (std::size_t i = 0; i < count; ++i)
    speeds.push_back(slowest * std::pow(fastest / slowest,
                                        static_cast<double>(i) / static_cast<double>(count - 1)));
  return speeds;
}

// Every setting of both adjusters of a direction by every speed; lines count from 2.
inline bike::DynoDamper dyno_points(const damper::Damper& truth, const DynoPlan& plan) {
  using bike::Adjuster;
  bike::DynoDamper table;
  table.file = "fork_dyno.csv";
  std::mt19937 random(plan.seed);
  std::normal_distribution<double> normal;
  for (const bool compression : {true, false}) {
    const Adjuster low =
        compression ? Adjuster::low_speed_compression : Adjuster::low_speed_rebound;
    const Adjuster high =
        compression ? Adjuster::high_speed_compression : Adjuster::high_speed_rebound;
    for (const auto& range : truth.adjusters())
      table.counted(range.adjuster) = bike::Clicks{0.0, 0.0, range.clicks, range.setting};
    const auto settings = [&](Adjuster adjuster) {
      std::vector<int> all;
      if (const auto range = truth.adjuster(adjuster)) {
        for (const double out : plan.out)
          all.push_back(static_cast<int>(std::lround(out * range->clicks)));
      } else {
        all.push_back(0);
      }
      return all;
    };
    for (const int bleed : settings(low))
      for (const int valve : settings(high)) {
        const damper::Curve curve = truth.with(low, bleed).with(high, valve).curve();
        for (const double speed : plan.speeds_m_s) {
          bike::DynoPoint point;
          point.velocity_m_s = compression ? speed : -speed;
          point.force_n =
              curve.force_n(point.velocity_m_s) * (1.0 + plan.noise_share * normal(random));
          point.setting.fill(std::nan(""));
          if (truth.adjuster(low)) point.setting[static_cast<std::size_t>(low)] = bleed;
          if (truth.adjuster(high)) point.setting[static_cast<std::size_t>(high)] = valve;
          point.line = static_cast<int>(table.points.size()) + 2;
          table.points.push_back(point);
        }
      }
  }
  return table;
}

}  // namespace clickwise::test
