#include "packing.hpp"

#include <algorithm>

#include "clickwise/core/parallel.hpp"
#include "clickwise/events/hit_trains.hpp"
#include "clickwise/run/recording.hpp"
#include "clickwise/sim/forward.hpp"
#include "clickwise/sim/inverse.hpp"

namespace clickwise::advice {

namespace {

constexpr double least_stretch_s = 2.0;

std::vector<run::Stretch> valid_stretches(const run::Motion& motion) {
  std::vector<run::Stretch> stretches;
  const auto least = static_cast<std::size_t>(least_stretch_s * motion.time.rate_hz);
  for (std::size_t i = 0; i < motion.valid.size(); ++i) {
    if (!motion.valid[i]) continue;
    std::size_t end = i;
    while (end < motion.valid.size() && motion.valid[end]) ++end;
    if (end - i >= std::max<std::size_t>(least, 4)) stretches.push_back({i, end});
    i = end;
  }
  return stretches;
}

double climb_of(const EndRide& ride, const run::Motion& modelled) {
  events::HitTrainOptions options;
  options.stroke_m = ride.end->stroke_m;
  return climb_m_per_hit(events::hit_trains(modelled, *ride.counted, options));
}

std::vector<double> climbs_of_draw(const EndRide& ride,
                                   const std::vector<sim::VehicleEnd>& settings,
                                   const sim::Draw& draw) {
  const run::Motion& recorded = *ride.motion;
  const std::vector<run::Stretch> stretches = valid_stretches(recorded);
  std::vector<sim::Forcing> forcings;
  for (const run::Stretch& stretch : stretches) {
    const std::size_t size = stretch.end - stretch.begin;
    forcings.push_back(sim::recover_forcing(
        sim::drawn(*ride.vehicle, draw),
        {recorded.time.interval_s(), std::span(recorded.travel_m).subspan(stretch.begin, size),
         std::span(recorded.velocity_m_s).subspan(stretch.begin, size)}));
  }
  std::vector<double> climbs;
  run::Motion modelled = recorded;
  for (const sim::VehicleEnd& setting : settings) {
    for (std::size_t k = 0; k < stretches.size(); ++k) {
      const sim::Ridden ridden = sim::ride_forward(sim::drawn(setting, draw), forcings[k]);
      const auto at = static_cast<std::ptrdiff_t>(stretches[k].begin);
      std::copy(ridden.travel_m.begin(), ridden.travel_m.end(), modelled.travel_m.begin() + at);
      std::copy(ridden.velocity_m_s.begin(), ridden.velocity_m_s.end(),
                modelled.velocity_m_s.begin() + at);
    }
    climbs.push_back(climb_of(ride, modelled));
  }
  return climbs;
}

}  // namespace

double climb_m_per_hit(const std::vector<run::HitTrain>& trains) {
  double climb_m = 0.0;
  double hits = 0.0;
  for (const run::HitTrain& train : trains) {
    climb_m += train.climb_m_per_hit * train.hits;
    hits += train.hits;
  }
  return hits > 0.0 ? climb_m / hits : 0.0;
}

std::vector<std::vector<double>> modelled_climbs(const EndRide& ride,
                                                 const std::vector<sim::VehicleEnd>& settings,
                                                 const std::vector<sim::Draw>& draws) {
  std::vector<std::vector<double>> climbs(draws.size());
  core::parallel_for(draws.size(),
                     [&](std::size_t d) { climbs[d] = climbs_of_draw(ride, settings, draws[d]); });
  return climbs;
}

}  // namespace clickwise::advice
