#include "trials.hpp"

#include <fmt/format.h>

#include <cstdlib>
#include <variant>

namespace clickwise::advice {

namespace {

void scale_spring(bike::Spring& spring, double factor) {
  if (auto* coil = std::get_if<bike::CoilSpring>(&spring.kind)) {
    coil->rate_n_m *= factor;
  } else if (auto* air = std::get_if<bike::AirSpring>(&spring.kind)) {
    air->pressure_pa *= factor;
  } else {
    core::Polyline& force_n = std::get<bike::TableSpring>(spring.kind).force_n;
    std::vector<double> forces = force_n.y();
    for (double& force : forces) force *= factor;
    force_n = core::Polyline(force_n.x(), forces);
  }
}

// The end with its bike's spring changed, everything else as it is.
template <typename Change>
sim::VehicleEnd with_spring(const EndRide& ride, const Change& change) {
  bike::Bike bike = *ride.bike;
  change(*bike.end(ride.name)->spring);
  return sim::VehicleEnd::from(bike, ride.name);
}

}  // namespace

std::vector<ClickTrial> click_trials(const EndRide& ride, int most_clicks) {
  std::vector<ClickTrial> trials;
  for (const damper::AdjusterRange& range : ride.damper->adjusters()) {
    for (int clicks = -most_clicks; clicks <= most_clicks; ++clicks) {
      const int to = range.setting + clicks;
      if (clicks == 0 || to < 0 || to > range.clicks) continue;
      ClickTrial trial{range, to, *ride.vehicle};
      trial.end.curve = ride.damper->curve_with(range.adjuster, to);
      trials.push_back(std::move(trial));
    }
  }
  return trials;
}

std::vector<PartTrial> part_trials(const EndRide& ride) {
  const std::optional<bike::Spring>& spring = ride.end->spring;
  if (!spring) return {};
  std::vector<PartTrial> trials;
  for (const int percent : {10, 20, -10, -20}) {
    const double factor = 1.0 + 0.01 * percent;
    trials.push_back(
        {"spring",
         fmt::format("{} % {} spring force", std::abs(percent), percent > 0 ? "more" : "less"),
         percent > 0, with_spring(ride, [&](bike::Spring& own) { scale_spring(own, factor); })});
  }
  const auto* air = std::get_if<bike::AirSpring>(&spring->kind);
  if (air && 0.9 * air->volume_m3 > 1.05 * air->area_m2 * ride.end->stroke_m)
    trials.push_back(
        {"volume", "an air chamber a tenth smaller", true, with_spring(ride, [](bike::Spring& own) {
           std::get<bike::AirSpring>(own.kind).volume_m3 *= 0.9;
         })});
  else if (spring->bumper)
    trials.push_back(
        {"bumper", "a bumper half as strong again", true,
         with_spring(ride, [](bike::Spring& own) { own.bumper->end_force_n *= 1.5; })});
  return trials;
}

}  // namespace clickwise::advice
