#include "clickwise/damper/effect.hpp"

#include <set>

namespace clickwise::damper {

namespace {

const Law& side(const Curve& curve, bike::Adjuster adjuster) {
  return bike::acts_in_compression(adjuster) ? curve.compression : curve.rebound;
}

std::vector<double> forces(const Law& law, const std::vector<double>& speeds_m_s) {
  std::vector<double> all;
  for (const double v : speeds_m_s) all.push_back(law.force_n(v));
  return all;
}

// Empty when the setting is beyond the adjuster's range.
std::vector<double> change(const Damper& damper, const AdjusterRange& range, int setting,
                           const std::vector<double>& speeds_m_s) {
  if (setting < 0 || setting > range.clicks) return {};
  const Curve now = damper.curve();
  const Curve then = damper.curve_with(range.adjuster, setting);
  std::vector<double> difference;
  for (const double v : speeds_m_s)
    difference.push_back(side(then, range.adjuster).force_n(v) -
                         side(now, range.adjuster).force_n(v));
  return difference;
}

}  // namespace

EffectTable effect_table(const Damper& damper, const std::vector<double>& speeds_m_s) {
  const Curve now = damper.curve();
  EffectTable table;
  table.speed_m_s = speeds_m_s;
  table.compression_n = forces(now.compression, speeds_m_s);
  table.rebound_n = forces(now.rebound, speeds_m_s);
  table.compression_knee_m_s = now.compression.knee_m_s();
  table.rebound_knee_m_s = now.rebound.knee_m_s();
  table.assumed = damper.assumed();
  for (const AdjusterRange& range : damper.adjusters())
    table.clicks.push_back({range, change(damper, range, range.setting - 1, speeds_m_s),
                            change(damper, range, range.setting + 1, speeds_m_s)});
  return table;
}

std::vector<Family> families(const Damper& damper, const std::vector<double>& speeds_m_s) {
  std::vector<Family> all;
  for (const AdjusterRange& range : damper.adjusters()) {
    std::set<int> settings{range.setting};
    for (int quarter = 0; quarter <= 4; ++quarter)
      settings.insert((range.clicks * quarter + 2) / 4);
    Family family{range, {}};
    for (const int setting : settings) {
      const Curve curve = damper.curve_with(range.adjuster, setting);
      family.curves.push_back(
          {setting, setting == range.setting, forces(side(curve, range.adjuster), speeds_m_s)});
    }
    all.push_back(std::move(family));
  }
  return all;
}

std::vector<double> usual_speeds_m_s() {
  return {0.02, 0.05, 0.1, 0.15, 0.2, 0.3, 0.4, 0.5, 0.7, 1.0, 1.5, 2.0, 3.0};
}

}  // namespace clickwise::damper
