#include "archived_ride.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <utility>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::workflow {

namespace {

constexpr double same_stroke_m = 1e-6;

std::optional<archive::EndOfRun>& end_of(archive::Run& run, bike::EndName name) {
  return name == bike::EndName::front ? run.front : run.rear;
}

// As if the file stood in the archive as in a folder: messages tell both.
bike::Bike stored_bike(const archive::Run& run, const std::string& path) {
  bike::FilesBeside beside;
  for (const archive::TextFile& file : run.beside) beside[file.name] = file.text;
  return bike::parse_bike(run.bike.text, path + "/" + run.bike.name, beside);
}

bool same_sensor(const bike::Potentiometer& a, const bike::Potentiometer& b) {
  return a.column == b.column && a.travel_m.x() == b.travel_m.x() &&
         a.travel_m.y() == b.travel_m.y();
}

// What the archive's travel was made by, where the bike file says something else.
void note_differences(const bike::Bike& stored, const Ride& ride, std::vector<std::string>& notes) {
  for (const RideEnd& ridden : ride.ends) {
    const auto& now = ride.bike.end(ridden.name);
    const auto& then = stored.end(ridden.name);
    if (!then) continue;
    std::string what;
    if (std::abs(now->stroke_m - then->stroke_m) > same_stroke_m)
      what = fmt::format("stroke_mm = {:g}", core::to_mm(then->stroke_m));
    if (!same_sensor(now->sensor, then->sensor))
      what += (what.empty() ? "" : " and ") + std::string("another sensor or calibration");
    if (!what.empty())
      notes.push_back(fmt::format(
          "{}: the archive's travel was made with {}; the bike file given now differs, and the "
          "travel is kept: import the log again if the archive's was wrong",
          bike::to_string(ridden.name), what));
  }
}

void note_unused(const archive::Run& run, const Ride& ride, std::vector<std::string>& notes) {
  for (const bike::EndName name : bike::both_ends) {
    const bool archived =
        name == bike::EndName::front ? run.front.has_value() : run.rear.has_value();
    if (archived && !ride.bike.end(name))
      notes.push_back(fmt::format("the archive holds a {} end, which the bike file does not have",
                                  bike::to_string(name)));
  }
}

void take_ends(archive::Run& run, Ride& ride) {
  for (const bike::EndName name : bike::both_ends) {
    auto& stored = end_of(run, name);
    if (!stored || !ride.bike.end(name)) continue;
    RideEnd end{name, std::move(stored->motion)};
    end.felt_m_s2 = std::move(stored->felt_m_s2);
    end.measured_by = end.motion.source;
    end.motion.source = run::Source::archive;
    ride.ends.push_back(std::move(end));
  }
}

}  // namespace

void count_riding(Ride& ride) {
  const double interval_s = ride.ends.front().motion.time.interval_s();
  const auto seconds = [&](const std::vector<std::uint8_t>& mask) {
    return static_cast<double>(std::ranges::count(mask, 1)) * interval_s;
  };
  ride.log.riding_s = seconds(ride.riding);
  for (RideEnd& end : ride.ends) {
    end.counted.resize(ride.riding.size());
    std::ranges::transform(ride.riding, end.motion.valid, end.counted.begin(),
                           [](std::uint8_t riding, std::uint8_t valid) {
                             return static_cast<std::uint8_t>(riding != 0 && valid != 0);
                           });
    end.riding_s = seconds(end.counted);
  }
}

Ride ride_of_archive(const RideOptions& options) {
  if (options.smooth_span_s)
    throw core::InputError({"command line"}, "--smooth cannot smooth an archive anew",
                           "give the log that it was made from");
  archive::Run run = archive::read_archive(options.log_path);
  const bike::Bike stored = stored_bike(run, options.log_path);
  Ride ride;
  ride.bike = options.bike_path.empty() ? stored : bike::read_bike_file(options.bike_path);
  ride.log = {run.log_name,     run.duration_s, 0.0,
              run.time.rate_hz, run.samples,    std::move(run.faults)};
  ride.notes = std::move(run.notes);
  note_unused(run, ride, ride.notes);
  take_ends(run, ride);
  if (ride.ends.empty())
    throw core::JobError({options.log_path}, "the archive holds no end of this bike file",
                         "leave --bike out, or give the bike that was ridden");
  if (!options.bike_path.empty()) note_differences(stored, ride, ride.notes);
  ride.riding = std::move(run.riding);
  ride.speed_m_s = std::move(run.speed_m_s);
  count_riding(ride);
  return ride;
}

archive::Run run_of(const Ride& ride) {
  archive::Run run;
  run.bike = {std::filesystem::path(ride.bike.file).filename().string(), ride.bike.text};
  run.log_name = ride.log.name;
  run.duration_s = ride.log.duration_s;
  run.samples = ride.log.samples;
  run.faults = ride.log.faults;
  run.notes = ride.notes;
  run.time = ride.ends.front().motion.time;
  run.riding = ride.riding;
  run.speed_m_s = ride.speed_m_s;
  for (const RideEnd& end : ride.ends) {
    const bike::End& built = *ride.bike.end(end.name);
    end_of(run, end.name) = archive::EndOfRun{end.motion, built.stroke_m, end.felt_m_s2};
    end_of(run, end.name)->motion.source = end.measured_by;
    const auto* dyno = built.damper ? std::get_if<bike::DynoDamper>(&*built.damper) : nullptr;
    if (dyno) run.beside.push_back({dyno->file, dyno->text});
  }
  return run;
}

}  // namespace clickwise::workflow
