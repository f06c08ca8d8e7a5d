#include "packing.hpp"

#include <algorithm>

#include "clickwise/core/parallel.hpp"
#include "clickwise/events/hit_trains.hpp"
#include "clickwise/run/recording.hpp"
#include "clickwise/sim/forward.hpp"
#include "clickwise/sim/inverse.hpp"

namespace clickwise::advice {

namespace {

// Before a train, for the new setting to find its level; behind it, for a train that lasts longer.
constexpr double lead_s = 1.0;
constexpr double tail_s = 0.5;
// Trains beyond so much of the ride are left out, evenly over it: the climb is a mean.
constexpr double longest_s = 90.0;

// The valid samples around a train.
run::Stretch around(const run::HitTrain& train, const run::Motion& motion) {
  const auto index = [&](double t_s) {
    const double i = (t_s - motion.time.start_s) * motion.time.rate_hz;
    return static_cast<std::size_t>(std::clamp(i, 0.0, static_cast<double>(motion.time.samples)));
  };
  std::size_t begin = index(0.5 * (train.begin_s + train.end_s));
  std::size_t end = begin;
  while (begin > index(train.begin_s - lead_s) && motion.valid[begin - 1]) --begin;
  while (end < index(train.end_s + tail_s) && motion.valid[end]) ++end;
  return {begin, end};
}

// Around the trains of the ride, joined where they overlap, about `longest_s` of them.
std::vector<run::Stretch> train_stretches(const EndRide& ride) {
  double seconds = 0.0;
  for (const run::HitTrain& train : *ride.trains)
    seconds += lead_s + train.end_s - train.begin_s + tail_s;
  const double every = std::max(1.0, seconds / longest_s);
  std::vector<run::Stretch> stretches;
  double due = 0.0;
  for (const run::HitTrain& train : *ride.trains) {
    due += 1.0;
    if (due < every) continue;
    due -= every;
    const run::Stretch one = around(train, *ride.motion);
    if (one.end - one.begin < 4) continue;
    if (!stretches.empty() && one.begin <= stretches.back().end)
      stretches.back().end = std::max(stretches.back().end, one.end);
    else
      stretches.push_back(one);
  }
  return stretches;
}

double climb_of(const EndRide& ride, const run::Motion& modelled,
                const std::vector<std::uint8_t>& counted) {
  events::HitTrainOptions options;
  options.stroke_m = ride.end->stroke_m;
  return climb_m_per_hit(events::hit_trains(modelled, counted, options));
}

std::vector<double> climbs_of_draw(const EndRide& ride,
                                   const std::vector<sim::VehicleEnd>& settings,
                                   const sim::Draw& draw) {
  const run::Motion& recorded = *ride.motion;
  const std::vector<run::Stretch> stretches = train_stretches(ride);
  std::vector<sim::Forcing> forcings;
  std::vector<std::uint8_t> counted(recorded.time.samples, 0);
  for (const run::Stretch& stretch : stretches) {
    const auto from = static_cast<std::ptrdiff_t>(stretch.begin);
    const auto to = static_cast<std::ptrdiff_t>(stretch.end);
    std::copy(ride.counted->begin() + from, ride.counted->begin() + to, counted.begin() + from);
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
    climbs.push_back(climb_of(ride, modelled, counted));
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
