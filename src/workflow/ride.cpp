#include "clickwise/workflow/ride.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <utility>

#include "archived_ride.hpp"
#include "clickwise/archive/run_archive.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/logs/log.hpp"
#include "clickwise/motion/potentiometer.hpp"
#include "clickwise/motion/riding.hpp"
#include "clickwise/motion/sprung_accel.hpp"

namespace clickwise::workflow {

namespace {

bool has_sprung_accel(const bike::Bike& bike, bike::EndName name) {
  return bike.end(name) && bike.end(name)->sprung_accel;
}

// The columns a review reads: each end's sensor, then the speed where there is one, then the
// accelerometers of the sprung sides.
std::vector<bike::ColumnRef> wanted_columns(const bike::Bike& bike) {
  std::vector<bike::ColumnRef> columns;
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name)) columns.push_back(bike.end(name)->sensor.column);
  if (bike.log.speed) columns.push_back(bike.log.speed->column);
  for (const bike::EndName name : bike::both_ends)
    if (has_sprung_accel(bike, name)) columns.push_back(bike.end(name)->sprung_accel->column);
  return columns;
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

std::vector<double> speed_on_base(const bike::Bike& bike, const run::Recording& recording,
                                  const motion::UniformClock& clock) {
  if (!bike.log.speed) return {};
  std::vector<double> speed = motion::on_base(recording, recording.channels.size() - 1, clock);
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
void refuse_shared_columns(const bike::Bike& bike) {
  std::vector<std::pair<std::string, bike::ColumnRef>> taken;
  const auto take = [&](const std::string& key, const bike::ColumnRef& column) {
    for (const auto& [other, its_column] : taken)
      if (its_column == column)
        throw core::InputError({bike.file}, other + " and " + key + " both name " + column.label(),
                               "give each the column of its own; clickwise inspect lists them");
    taken.emplace_back(key, column);
  };
  if (bike.log.time) take("log.time", bike.log.time->column);
  if (bike.log.speed) take("log.speed", bike.log.speed->column);
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name))
      take(std::string(bike::to_string(name)) + ".sensor", bike.end(name)->sensor.column);
  for (const bike::EndName name : bike::both_ends)
    if (has_sprung_accel(bike, name))
      take(std::string(bike::to_string(name)) + ".sprung_accel",
           bike.end(name)->sprung_accel->column);
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
  refuse_shared_columns(ride.bike);
  run::Recording recording =
      logs::read_log(options.log_path, ride.bike.log, wanted_columns(ride.bike));
  const motion::UniformClock clock = motion::uniform_clock(recording);
  refuse_impossible_rate(clock.base.rate_hz, ride.bike, options.log_path);
  ride.log.name = recording.name;
  ride.log.duration_s = recording.t_s.back();
  ride.log.rate_hz = clock.base.rate_hz;
  ride.log.samples = recording.t_s.size();
  ride.log.faults = recording.faults;
  SprungAccels accels = take_sprung_accels(ride.bike, clock, recording);
  ride.notes = recording.notes;

  const std::vector<bike::EndName> names = ends_of(ride.bike);
  std::vector<motion::PotentiometerMotion> motions(names.size());
  motion::MotionOptions motion_options;
  motion_options.smooth_span_s = options.smooth_span_s;
  core::parallel_for(names.size() + 1, [&](std::size_t i) {
    if (i == names.size())
      ride.speed_m_s = speed_on_base(ride.bike, recording, clock);
    else
      motions[i] =
          motion::from_potentiometer(recording, i, *ride.bike.end(names[i]), clock, motion_options);
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
