#include "clickwise/workflow/replay.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "clickwise/sim/bike_clicks.hpp"
#include "end_review.hpp"

namespace clickwise::workflow {

namespace {

std::array<double, sim::directions> splits_of(const Ride& ride, const RideEnd& end,
                                              const SplitRequest& asked) {
  const auto damper = damper_of(ride.bike, end.name);
  const ChosenSplits chosen = choose_splits(*ride.bike.end(end.name), asked.end(end.name), damper);
  return {chosen.compression.speed_m_s, chosen.rebound.speed_m_s};
}

sim::ReplayInput input_of(const Ride& ride, const RideEnd& end, const SplitRequest& asked) {
  return {sim::VehicleEnd::from(ride.bike, end.name),
          end.motion.time.interval_s(),
          end.motion.travel_m,
          end.motion.velocity_m_s,
          end.motion.valid,
          end.counted,
          splits_of(ride, end, asked),
          ride.bike.end(end.name)->bottom_out_within_m};
}

bool touches(const std::vector<ChangedSetting>& settings, bike::EndName name) {
  const std::string prefix = std::string(bike::to_string(name)) + ".";
  return std::any_of(settings.begin(), settings.end(), [&](const ChangedSetting& setting) {
    return setting.name.starts_with(prefix) || setting.name.starts_with("rider.");
  });
}

// Whether this end can be replayed; a sentence in `notes` when not.
bool replayable(const Ride& ride, bike::EndName name, std::vector<std::string>& notes) {
  try {
    sim::VehicleEnd::from(ride.bike, name);
    return true;
  } catch (const core::JobError& error) {
    notes.emplace_back(error.what());
    return false;
  }
}

}  // namespace

Replay replay(const ReplayOptions& options) {
  const Ride ride = load_ride(options.ride);
  Replay result{ride.bike.name, ride.log, {}, {}, ride.notes};
  bike::Bike changed = ride.bike;
  result.settings = apply_settings(changed, options.settings);
  std::vector<std::string> refusals;
  for (const RideEnd& end : ride.ends) {
    if (!end.motion.travel_known) {
      refusals.push_back(fmt::format("{}: a replay takes the travel, and {}",
                                     bike::to_string(end.name), end.motion.travel_withheld));
      continue;
    }
    if (!replayable(ride, end.name, refusals)) continue;
    const std::vector<sim::VehicleEnd> candidates{sim::VehicleEnd::from(changed, end.name)};
    sim::ReplayOptions replay_options;
    replay_options.ensemble.seed = options.seed;
    EndReplay one{end.name, touches(result.settings, end.name),
                  sim::replay(input_of(ride, end, options.splits), candidates, replay_options)};
    if (!one.result.carries_its_weight())
      result.notes.push_back(fmt::format(
          "{}: the model carries {:.2f} times the sprung weight: masses, front_share or spring of "
          "the bike file cannot be right",
          bike::to_string(end.name), one.result.carried_share));
    result.ends.push_back(std::move(one));
  }
  if (result.ends.empty())
    throw core::JobError({options.ride.bike_path}, "no end can be replayed: " + refusals.front(),
                         "complete the bike file");
  result.notes.insert(result.notes.end(), refusals.begin(), refusals.end());
  return result;
}

namespace {

struct Knob {
  bike::EndName end;
  damper::AdjusterRange range;
};

[[noreturn]] void refuse_map(const std::string& knobs, const std::string& wrong) {
  throw core::InputError({"--map " + knobs}, wrong,
                         "give two adjusters of one end, as in "
                         "--map front.low_speed_compression,front.high_speed_compression");
}

Knob knob_of(const bike::Bike& bike, const std::string& knobs, const std::string& name) {
  const auto path = sim::adjuster_path(name);
  if (!path) refuse_map(knobs, "\"" + name + "\" is no adjuster");
  if (!bike.end(path->first)) refuse_map(knobs, "this bike file has no such end");
  const auto damper = damper_of(bike, path->first);
  const auto range = damper ? damper->adjuster(path->second) : std::nullopt;
  if (!range) refuse_map(knobs, "this bike has no " + name);
  return {path->first, *range};
}

bool holds_aims(const sim::EndFigures& figures, const bike::End& end, const bike::Aims& aims) {
  const double minutes = figures.seconds / 60.0;
  const double mean_share = figures.travel_mean_m / end.stroke_m;
  return static_cast<double>(figures.bottom_outs.size()) <= aims.bottom_outs_per_minute * minutes &&
         static_cast<double>(figures.top_outs.size()) <= aims.top_outs_per_minute * minutes &&
         mean_share >= aims.travel_mean_share_low && mean_share <= aims.travel_mean_share_high &&
         figures.travel_max_m >= aims.travel_used_share * end.stroke_m;
}

}  // namespace

ClickMap click_map(const ReplayOptions& options, const std::string& knobs) {
  Ride ride = load_ride(options.ride);
  const auto comma = knobs.find(',');
  if (comma == std::string::npos) refuse_map(knobs, "one adjuster only");
  const Knob first = knob_of(ride.bike, knobs, knobs.substr(0, comma));
  const Knob second = knob_of(ride.bike, knobs, knobs.substr(comma + 1));
  if (first.end != second.end) refuse_map(knobs, "the adjusters are of different ends");
  if (first.range.adjuster == second.range.adjuster) refuse_map(knobs, "the same adjuster twice");
  const auto end = std::find_if(ride.ends.begin(), ride.ends.end(),
                                [&](const RideEnd& one) { return one.name == first.end; });
  if (end == ride.ends.end()) refuse_map(knobs, "this end was not logged");
  if (!end->motion.travel_known)
    throw core::JobError({options.ride.log_path}, end->motion.travel_withheld,
                         "put a potentiometer beside the units for a map");

  const sim::ReplayInput input = input_of(ride, *end, options.splits);
  bike::Bike changed = ride.bike;
  apply_settings(changed, options.settings);
  const sim::VehicleEnd base = sim::VehicleEnd::from(changed, first.end);
  const damper::Damper damper = *damper_of(changed, first.end);
  ClickMap map{first.end, first.range, second.range, {}};
  std::vector<sim::VehicleEnd> candidates;
  for (int i = 0; i <= first.range.clicks; ++i)
    for (int j = 0; j <= second.range.clicks; ++j) {
      map.cells.push_back({i, j, {}, false});
      candidates.push_back(base);
      candidates.back().curve =
          damper.with(first.range.adjuster, i).with(second.range.adjuster, j).curve();
    }
  sim::ReplayOptions replay_options;
  replay_options.ensemble.draws = 1;
  replay_options.ensemble.seed = options.seed;
  const sim::ReplayResult result = sim::replay(input, candidates, replay_options);
  for (std::size_t k = 0; k < map.cells.size(); ++k) {
    map.cells[k].figures = result.predictions[k].figures;
    map.cells[k].holds_aims =
        holds_aims(map.cells[k].figures, *ride.bike.end(first.end), ride.bike.aims);
  }
  return map;
}

}  // namespace clickwise::workflow
