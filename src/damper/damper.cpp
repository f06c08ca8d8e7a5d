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

// Whether a dyno fit, where there is one, tells what the adjuster's clicks move.
bool measured(const DynoFit* fit, bike::Adjuster name) {
  if (!fit) return true;
  const SideFit& side = bike::acts_in_compression(name) ? fit->compression : fit->rebound;
  return bike::is_bleed(name) ? side.bleed_clicks_known : side.valve_clicks_known;
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
  auto fit =
      std::make_shared<const DynoFit>(fit_dyno(std::get<bike::DynoDamper>(*end.damper), place));
  Damper damper(fit->sides, false);
  damper.fit_ = std::move(fit);
  return damper;
}

Damper::Damper(bike::HydraulicDamper sides, bool assumed)
    : sides_(std::move(sides)), assumed_(assumed) {}

Curve Damper::curve() const {
  return {law_of(sides_.compression), law_of(sides_.rebound), assumed_, scatter_share()};
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
  return AdjusterRange{name, clicks->setting, clicks->clicks, assumed_ || !measured(fit(), name)};
}

double Damper::scatter_share() const {
  if (assumed_) return assumed_scatter_share;
  return fit_ ? std::min(fit_->scatter_share, assumed_scatter_share) : written_scatter_share;
}

std::vector<AdjusterRange> Damper::adjusters() const {
  std::vector<AdjusterRange> all;
  for (const bike::Adjuster name : bike::all_adjusters)
    if (const auto range = adjuster(name)) all.push_back(*range);
  return all;
}

}  // namespace clickwise::damper
