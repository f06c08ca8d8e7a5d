#include "sides.hpp"

namespace clickwise::damper {

namespace {

constexpr double bleed_open_over_closed = 10.0;
constexpr double valve_closed_over_open = 4.0;

double out(const bike::Clicks& counted) {
  return static_cast<double>(counted.setting) / counted.clicks;
}

}  // namespace

Law law_of(const bike::HydraulicSide& side) {
  Law law;
  law.bleed_m_s = side.bleed ? side.bleed->value() : side.fixed_bleed_m_s.value_or(0.0);
  law.port_n_s2_m2 = side.port_n_s2_m2;
  if (side.valve || side.fixed_valve_n) {
    law.opening_n = side.valve ? side.valve->value() : *side.fixed_valve_n;
    law.slope_n_s_m = side.slope_n_s_m;
  }
  return law;
}

bike::Clicks plausible_bleed(double now_m_s, const bike::Clicks& counted) {
  const double closed = now_m_s / (1.0 + (bleed_open_over_closed - 1.0) * out(counted));
  return {closed, closed * bleed_open_over_closed, counted.clicks, counted.setting};
}

bike::Clicks plausible_valve(double now_n, const bike::Clicks& counted) {
  const double closed = now_n / (1.0 - (1.0 - 1.0 / valve_closed_over_open) * out(counted));
  return {closed, closed / valve_closed_over_open, counted.clicks, counted.setting};
}

}  // namespace clickwise::damper
