// What the `damper` command shows: the curve at its settings, and what each click changes.
#pragma once

#include <optional>
#include <vector>

#include "clickwise/damper/damper.hpp"

namespace clickwise::damper {

// Change of the force magnitude at each speed of the table, in the adjuster's own direction, N.
// Empty where the adjuster has no click left that way.
struct ClickEffect {
  AdjusterRange range;
  std::vector<double> firmer_n;  // one click in: >= 0
  std::vector<double> softer_n;  // one click out: <= 0
};

// Forces are magnitudes, N, one per speed.
struct EffectTable {
  std::vector<double> speed_m_s;
  std::vector<double> compression_n;
  std::vector<double> rebound_n;
  double compression_knee_m_s = 0.0;  // infinite without a valve
  double rebound_knee_m_s = 0.0;
  std::vector<ClickEffect> clicks;  // one per adjuster that the damper has
  bool assumed = false;
};

// The curve with an adjuster at one setting and the others as they are.
struct FamilyCurve {
  int setting = 0;
  bool present = false;         // it is there now
  std::vector<double> force_n;  // magnitudes in the adjuster's own direction, one per speed
};

// The curves across one adjuster: closed, open, three in between, and the present one.
struct Family {
  AdjusterRange range;
  std::vector<FamilyCurve> curves;  // closed first
};

// One family for each adjuster that the damper has; speeds are magnitudes >= 0 in m/s.
std::vector<Family> families(const Damper& damper, const std::vector<double>& speeds_m_s);

// At the damper's present settings; speeds are magnitudes >= 0 in m/s.
EffectTable effect_table(const Damper& damper, const std::vector<double>& speeds_m_s);

// Speeds that show a curve: dense below the knee, out to 3 m/s. (m/s)
std::vector<double> usual_speeds_m_s();

}  // namespace clickwise::damper
