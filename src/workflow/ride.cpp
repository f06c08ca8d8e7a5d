#include "clickwise/workflow/ride.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <iterator>
#include <utility>

#include "archived_ride.hpp"
#include "clickwise/archive/run_archive.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/logs/log.hpp"
#include "clickwise/motion/riding.hpp"
#include "clickwise/motion/sprung_accel.hpp"
#include "end_motion.hpp"

namespace clickwise::workflow {

namespace {

bool has_sprung_accel(const bike::Bike& bike, bike::EndName name) {
  return bike.end(name) && bike.end(name)->sprung_accel;
}

std::vector<bike::EndName> ends_of(const bike::Bike& bike) {
  std::vector<bike::EndName> names;
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name)) names.push_back(name);
  return names;
}

using SprungAccels = std::array<motion::SprungAccelMotion, 2>;  // front, rear

// They leave the recording before the travel sensors are judged: their noise is no sign that a
// travel sensor is stuck.
SprungAccels take_sprung_accels(const bike::Bike& bike, const motion::UniformClock& clock,
                                run::Recording& recording) {
  SprungAccels taken;
  for (const bike::EndName name : {bike::EndName::rear, bike::EndName::front})
    if (has_sprung_accel(bike, name))
      taken[name == bike::EndName::rear] =
          motion::take_sprung_accel(recording, *bike.end(name)->sprung_accel, clock);
  return taken;
}

// A unit slower than the log leaves cells empty by right: what is missing from units is counted
// where their own rate is known.
run::FaultLedger faults_of_log(const run::FaultLedger& read, const run::Recording& units) {
  run::FaultLedger kept;
  for (const run::Fault& fault : read.faults()) {
    const bool of_unit =
        std::any_of(units.channels.begin(), units.channels.end(),
                    [&](const run::Channel& channel) { return channel.name == fault.channel; });
    if (fault.kind != run::FaultKind::missing || !of_unit)
      kept.add(fault.kind, fault.channel, fault.count, fault.seconds);
  }
  return kept;
}

// The units' noise is no sign that a travel sensor is stuck, either.
run::Recording take_units(const ColumnPlan& plan, run::Recording& recording) {
  run::Recording units;
  units.t_s = recording.t_s;
  units.stretches = recording.stretches;
  units.interval_s = recording.interval_s;
  const auto first = recording.channels.begin() + static_cast<std::ptrdiff_t>(plan.first_unit);
  units.channels.assign(std::make_move_iterator(first),
                        std::make_move_iterator(recording.channels.end()));
  recording.channels.resize(plan.first_unit);
  return units;
}

std::vector<double> speed_on_base(const bike::Bike& bike, const ColumnPlan& plan,
                                  const run::Recording& recording,
                                  const motion::UniformClock& clock) {
  if (!plan.speed) return {};
  std::vector<double> speed = motion::on_base(recording, *plan.speed, clock);
  for (double& value : speed) value *= bike.log.speed->metres_per_second_per_unit;
  return speed;
}

void find_riding(Ride& ride) {
  std::vector<const run::Motion*> motions;
  for (const RideEnd& end : ride.ends) motions.push_back(&end.motion);
  ride.riding = motion::riding(motions, ride.speed_m_s).mask;
  count_riding(ride);
}

constexpr double slowest_rate_hz = 10.0;    // below it no movement of a wheel can be followed
constexpr double fastest_rate_hz = 50e3;    // above it no travel sensor is logged
constexpr double far_outside_share = 0.25;  // of the stroke
constexpr double mostly = 0.5;

// One column cannot be two things: a slip of the bike file that would give plausible nonsense.
void refuse_shared_columns(const bike::Bike& bike, const ColumnPlan& plan) {
  std::vector<NamedColumn> taken;
  const auto take = [&](const NamedColumn& one) {
    for (const NamedColumn& other : taken)
      if (other.column == one.column)
        throw core::InputError({bike.file},
                               other.key + " and " + one.key + " both name " + one.column.label(),
                               "give each the column of its own; clickwise inspect lists them");
    taken.push_back(one);
  };
  if (bike.log.time) take({"log.time", bike.log.time->column});
  if (plan.speed) take(plan.columns[*plan.speed]);
  for (std::size_t i = 0; i < plan.columns.size(); ++i)
    if (plan.speed != i) take(plan.columns[i]);
}

void refuse_impossible_rate(double rate_hz, const bike::Bike& bike, const std::string& path) {
  if (rate_hz >= slowest_rate_hz && rate_hz <= fastest_rate_hz) return;
  throw core::JobError(
      {path},
      fmt::format("by its clock this log runs at {:.3g} Hz, too {} for suspension", rate_hz,
                  rate_hz < slowest_rate_hz ? "slow" : "fast"),
      bike.log.time ? "check the column and the unit (s, ms or us) of [log] time in the bike file"
                    : "check [log] rate_hz in the bike file");
}

// Travel that is mostly far outside the stroke is no travel: that end is left out, and it is said.
void leave_out_nonsense(const bike::End& end, RideEnd& ride, run::FaultLedger& faults,
                        std::vector<std::string>& notes) {
  if (!ride.motion.travel_known) return;
  const double room_m = far_outside_share * end.stroke_m;
  std::size_t usable = 0;
  std::size_t outside = 0;
  for (std::size_t i = 0; i < ride.motion.valid.size(); ++i) {
    if (!ride.motion.valid[i]) continue;
    ++usable;
    const double travel_m = ride.motion.travel_m[i];
    outside += travel_m < -room_m || travel_m > end.stroke_m + room_m;
  }
  if (static_cast<double>(outside) <= mostly * static_cast<double>(usable)) return;
  std::fill(ride.motion.valid.begin(), ride.motion.valid.end(), std::uint8_t{0});
  const std::string channel = end.sensor.column.label();
  faults.add(run::FaultKind::saturated, channel, 1,
             static_cast<double>(usable) * ride.motion.time.interval_s());
  notes.push_back(fmt::format(
      "{} is left out: most of its readings lie far outside the stroke of the {}; check the "
      "column and the calibration",
      channel, bike::part(ride.name)));
}

void refuse_without_ride(const Ride& ride, const std::string& path) {
  if (ride.log.riding_s > 0.0) return;
  std::string found = "no usable ride in this log: ";
  for (const std::string& note : ride.notes) found += note + "; ";
  if (ride.notes.empty()) found += "nothing moved; ";
  found.resize(found.size() - 2);
  throw core::JobError({path}, found, "clickwise inspect shows what the log holds");
}

Ride ride_of_log(const RideOptions& options) {
  if (options.bike_path.empty())
    throw core::InputError({"command line"},
                           "--bike is missing: only an archive brings its bike file along",
                           "add --bike BIKE.toml; clickwise inspect LOG offers one to start from");
  Ride ride;
  ride.bike = bike::read_bike_file(options.bike_path);
  const ColumnPlan plan = plan_columns(ride.bike);
  refuse_shared_columns(ride.bike, plan);
  run::Recording recording = logs::read_log(options.log_path, ride.bike.log, plan.refs());
  const motion::UniformClock clock = motion::uniform_clock(recording);
  refuse_impossible_rate(clock.base.rate_hz, ride.bike, options.log_path);
  ride.log.name = recording.name;
  ride.log.duration_s = recording.t_s.back();
  ride.log.rate_hz = clock.base.rate_hz;
  ride.log.samples = recording.t_s.size();
  SprungAccels accels = take_sprung_accels(ride.bike, clock, recording);
  const run::Recording units = take_units(plan, recording);
  ride.log.faults = faults_of_log(recording.faults, units);
  ride.notes = recording.notes;

  const std::vector<bike::EndName> names = ends_of(ride.bike);
  std::vector<EndMotion> motions(names.size());
  motion::MotionOptions motion_options;
  motion_options.smooth_span_s = options.smooth_span_s;
  core::parallel_for(names.size() + 1, [&](std::size_t i) {
    if (i == names.size())
      ride.speed_m_s = speed_on_base(ride.bike, plan, recording, clock);
    else
      motions[i] = end_motion(ride.bike, names[i], {recording, units}, plan, clock, motion_options);
  });
  for (std::size_t i = 0; i < names.size(); ++i) {
    ride.log.faults.merge(motions[i].faults);
    ride.notes.insert(ride.notes.end(), motions[i].notes.begin(), motions[i].notes.end());
    motion::SprungAccelMotion& accel = accels[names[i] == bike::EndName::rear];
    ride.log.faults.merge(accel.faults);
    ride.ends.push_back(
        {names[i], std::move(motions[i].motion), {}, 0.0, std::move(accel.felt_m_s2)});
    ride.ends.back().measured_by = ride.ends.back().motion.source;
    leave_out_nonsense(*ride.bike.end(names[i]), ride.ends.back(), ride.log.faults, ride.notes);
  }
  archive::round_to_stored(ride.speed_m_s);
  core::parallel_for(ride.ends.size(), [&](std::size_t i) {
    archive::round_to_stored(ride.ends[i].motion);
    archive::round_to_stored(ride.ends[i].felt_m_s2);
  });
  find_riding(ride);
  if (plan.hand_accel) ride.hand_arm = hand_arm(ride, units, *plan.hand_accel, clock);
  return ride;
}

}  // namespace

Ride load_ride(const RideOptions& options) {
  Ride ride =
      archive::is_archive(options.log_path) ? ride_of_archive(options) : ride_of_log(options);
  refuse_without_ride(ride, options.log_path);
  return ride;
}

}  // namespace clickwise::workflow
