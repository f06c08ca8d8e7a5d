#include "clickwise/damper/damper.hpp"

#include <algorithm>

#include "assumed.hpp"
#include "sides.hpp"

namespace clickwise::damper {

namespace {

// The clicks behind an adjuster's name; empty when the damper has none of that name.
std::optional<bike::Clicks>& clicks_of(bike::HydraulicDamper& sides, bike::Adjuster name) {
  bike::HydraulicSide& side = bike::acts_in_compression(name) ? sides.compression : sides.rebound;
  return bike::is_bleed(name) ? side.bleed : side.valve;
}

Damper from_assumed(const bike::AssumedDamper& assumed, const bike::End& end,
                    std::optional<double> sprung_mass_kg, const core::Place& place) {
  if (!sprung_mass_kg)
    throw core::JobError(
        place, "an assumed damper is scaled by the sprung mass, which is not known",
        "add rider.mass_kg, chassis.mass_kg, chassis.front_share and each end's unsprung_mass_kg");
  if (!end.spring)
    throw core::JobError(place, "an assumed damper is scaled by the spring, which is not known",
                         "add the end's [spring] table");
  return Damper(laid_out(assumed, end, *sprung_mass_kg, place), true);
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

Damper Damper::from(const bike::End& end, std::optional<double> sprung_mass_kg,
                    const core::Place& place) {
  if (!end.damper)
    throw core::JobError(place, "this end has no damper",
                         "add a [damper] table; without dyno data kind = \"assumed\" and "
                         "damping_ratio = 0.30 will do");
  if (const auto* hydraulic = std::get_if<bike::HydraulicDamper>(&*end.damper))
    return Damper(*hydraulic, false);
  if (const auto* assumed = std::get_if<bike::AssumedDamper>(&*end.damper))
    return from_assumed(*assumed, end, sprung_mass_kg, place);
  throw core::JobError(place, "dyno points are not fitted by this version of the program",
                       "describe the damper with kind = \"hydraulic\", or with kind = \"assumed\" "
                       "and damping_ratio = 0.30");
}

Damper::Damper(bike::HydraulicDamper sides, bool assumed)
    : sides_(std::move(sides)), assumed_(assumed) {}

Curve Damper::curve() const {
  return {law_of(sides_.compression), law_of(sides_.rebound), assumed_};
}

Damper Damper::with(bike::Adjuster adjuster, int setting) const {
  Damper moved = *this;
  if (auto& clicks = clicks_of(moved.sides_, adjuster))
    clicks->setting = std::clamp(setting, 0, clicks->clicks);
  return moved;
}

Curve Damper::curve_with(bike::Adjuster adjuster, int setting) const {
  return with(adjuster, setting).curve();
}

std::optional<AdjusterRange> Damper::adjuster(bike::Adjuster name) const {
  Damper copy = *this;
  const auto& clicks = clicks_of(copy.sides_, name);
  if (!clicks) return std::nullopt;
  return AdjusterRange{name, clicks->setting, clicks->clicks};
}

std::vector<AdjusterRange> Damper::adjusters() const {
  std::vector<AdjusterRange> all;
  for (const bike::Adjuster name : bike::all_adjusters)
    if (const auto range = adjuster(name)) all.push_back(*range);
  return all;
}

}  // namespace clickwise::damper
