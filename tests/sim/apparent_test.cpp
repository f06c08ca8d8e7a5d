#include "clickwise/sim/apparent.hpp"

#include <catch2/catch.hpp>
#include <fmt/format.h>

#include "apparent_rides.hpp"

using namespace clickwise;
using namespace clickwise::apparent_rides;

namespace {
double steady_damper(double) { return 1.0; }
}

TEST_CASE("experiment", "[.][exp]") {
  for (int n = 0; n < 12; ++n) {
    const auto course = replay_rides::ride_number(n, 3, 90.0);
    for (int mode = 0; mode < 3; ++mode) {
      const auto truth = ride(course, mode < 2 ? std::function<double(double)>(steady_damper) : [](double p) { return 1.0 - 0.25 * p; });
      const auto log = logged(truth, course.parts.end.stroke_m, 5);
      const auto end = known(course.parts, mode != 1);
      const auto found = sim::apparent_damper(end, log.view());
      fmt::print("{} mode {} problem '{}' used {:.1f} lag {:.2f}ms share {:.3f} [{:.3f} {:.3f}] told {} offset {:.1f} fric {:.1f} [{:.1f} {:.1f}] true {} felt {:.2f} model {:.2f} app {:.2f}\n",
                 course.name, mode, found.problem, found.used_s, 1e3 * found.lag_s, found.spring_share.value, found.spring_share.low, found.spring_share.high, found.spring_share_told, found.offset_n, found.friction_n.value, found.friction_n.low, found.friction_n.high, end.friction_n, found.felt_rms_m_s2, found.model_rms_m_s2.value_or(0), found.apparent_rms_m_s2);
      const auto curve = damper::Damper(course.parts.damper).curve();
      if (mode < 2) {
      int in = 0, all = 0; double worst = 0, sq = 0;
      for (int d = 0; d < 2; ++d)
        for (const auto& p : d == 0 ? found.compression : found.rebound) {
          const double t = (d == 0 ? curve.compression : curve.rebound).force_n(p.speed_m_s);
          ++all; in += t >= p.force_n.low && t <= p.force_n.high;
          worst = std::max(worst, std::abs(p.force_n.value - t) / (5 + t)); sq += std::pow((p.force_n.value - t) / (5+t), 2);
        }
      fmt::print("COVER mode {} {} {} in {} of {}, worst {:.3f} rms {:.4f}\n", mode, course.name, fmt::format("fric {:.1f} [{:.1f} {:.1f}] true {}", found.friction_n.value, found.friction_n.low, found.friction_n.high, end.friction_n), in, all, worst, std::sqrt(sq / all));
      }
      if (found.fade) fmt::print("  fade {:.3f} [{:.3f} {:.3f}] {} windows {}\n", found.fade->change.value, found.fade->change.low, found.fade->change.high, found.fade->clear, found.fade->windows.size());
      if (mode == 2) continue;
      for (int d = 0; d < 2; ++d)
        for (const auto& p : d == 0 ? found.compression : found.rebound)
          fmt::print("   {} {:.2f}: {:.0f} [{:.0f} {:.0f}] true {:.0f}  {:.1f} s\n", d == 0 ? "c" : "r", p.speed_m_s, p.force_n.value, p.force_n.low, p.force_n.high, (d == 0 ? curve.compression : curve.rebound).force_n(p.speed_m_s), p.seconds);
    }
  }
}
