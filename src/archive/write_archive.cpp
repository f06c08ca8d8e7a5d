#include <fmt/format.h>

#include <limits>

#include "clickwise/archive/run_archive.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/io/atomic_file.hpp"
#include "clickwise/io/hdf5_writer.hpp"
#include "names.hpp"

namespace clickwise::archive {

namespace {

using core::to_mm;

constexpr std::string_view no_unit = "1";  // as CF conventions section 3.1 writes it

std::vector<float> all_stored_mm(const std::vector<double>& metres) {
  std::vector<float> stored(metres.size());
  for (std::size_t i = 0; i < metres.size(); ++i) stored[i] = stored_mm(metres[i]);
  return stored;
}

std::vector<float> as_floats(const std::vector<double>& values) {
  return {values.begin(), values.end()};
}

// One column of a list of things.
template <class Thing, class Get>
std::vector<double> column(const std::vector<Thing>& things, const Get& get) {
  std::vector<double> values;
  for (const Thing& thing : things) values.push_back(get(thing));
  return values;
}

void write_head(io::Hdf5Writer& file, const Run& run) {
  file.attribute("/", "schema", schema);
  file.attribute("/", "created", run.created);
  file.attribute("/", "program", run.program);
  file.text("/bike", run.bike.text, "text");
  file.attribute("/bike", "file", run.bike.name);
  if (run.beside.empty()) return;
  file.group("/beside_bike");
  for (std::size_t i = 0; i < run.beside.size(); ++i) {
    const std::string name = fmt::format("/beside_bike/{}", i + 1);
    file.text(name, run.beside[i].text, "text");
    file.attribute(name, "file", run.beside[i].name);
  }
}

void write_faults(io::Hdf5Writer& file, const run::FaultLedger& ledger) {
  std::vector<std::string> kinds, channels;
  std::vector<std::int64_t> counts;
  std::vector<double> seconds;
  for (const run::Fault& fault : ledger.faults()) {
    kinds.emplace_back(run::to_string(fault.kind));
    channels.push_back(fault.channel);
    counts.push_back(fault.count);
    seconds.push_back(fault.seconds);
  }
  file.group("/log/faults");
  file.texts("/log/faults/kind", kinds, "text");
  file.texts("/log/faults/channel", channels, "text");
  file.data("/log/faults/count", std::span<const std::int64_t>(counts), no_unit);
  file.data("/log/faults/seconds", std::span<const double>(seconds), "s");
}

void write_log(io::Hdf5Writer& file, const Run& run) {
  file.group("/log");
  file.attribute("/log", "name", run.log_name);
  file.attribute("/log", "duration_s", run.duration_s);
  file.attribute("/log", "samples", static_cast<double>(run.samples));
  file.texts("/log/notes", run.notes, "text");
  write_faults(file, run.faults);
}

void write_time(io::Hdf5Writer& file, const Run& run) {
  std::vector<double> time_s(run.time.samples);
  for (std::size_t i = 0; i < time_s.size(); ++i) time_s[i] = run.time.at(i);
  file.data("/time", std::span<const double>(time_s), "s");
  file.attribute("/time", "start_s", run.time.start_s);
  file.attribute("/time", "rate_hz", run.time.rate_hz);
  file.data("/riding", std::span<const std::uint8_t>(run.riding), no_unit);
  if (!run.speed_m_s.empty())
    file.data("/speed_m_s", std::span<const float>(as_floats(run.speed_m_s)), "m/s");
}

void write_end(io::Hdf5Writer& file, const std::string& group, const EndOfRun& end) {
  const run::Motion& motion = end.motion;
  const auto series = [&](const char* name, const std::vector<double>& values, const char* units) {
    const std::vector<float> stored = all_stored_mm(values);
    file.data(group + name, std::span<const float>(stored), units);
  };
  file.group(group);
  series("/travel_mm", motion.travel_m, "mm");
  series("/velocity_mm_s", motion.velocity_m_s, "mm/s");
  series("/velocity_sigma_mm_s", motion.velocity_sigma_m_s, "mm/s");
  if (!end.felt_m_s2.empty())
    file.data(group + "/felt_m_s2", std::span<const float>(as_floats(end.felt_m_s2)), "m/s2");
  file.data(group + "/valid", std::span<const std::uint8_t>(motion.valid), no_unit);
  file.attribute(group, "stroke_mm", to_mm(end.stroke_m));
  file.attribute(group, "measured_by", source_word(motion.source));
  file.attribute(group, "velocity_noise_mm_s", double{stored_mm(motion.velocity_noise_m_s)});
  file.attribute(group, "reading_noise_mm", double{stored_mm(motion.reading_noise_m)});
  file.attribute(group, "cutoff_hz", motion.cutoff_hz);
  file.attribute(group, "smoothing", motion.smoothing);
  if (!motion.travel_known) file.attribute(group, "travel_withheld", motion.travel_withheld);
}

void write_stops(io::Hdf5Writer& file, const std::string& group,
                 const std::vector<run::EndStop>& stops) {
  const auto add = [&](const char* name, const char* units, const auto& get) {
    file.data(group + name, std::span<const double>(column(stops, get)), units);
  };
  file.group(group);
  add("/t_s", "s", [](const run::EndStop& stop) { return stop.t_s; });
  add("/depth_mm", "mm", [](const run::EndStop& stop) { return to_mm(stop.depth_m); });
  add("/closing_speed_mm_s", "mm/s",
      [](const run::EndStop& stop) { return to_mm(stop.closing_speed_m_s); });
  add("/energy_left_j", "J", [](const run::EndStop& stop) {
    return stop.energy_left_j > 0.0 ? stop.energy_left_j : std::numeric_limits<double>::quiet_NaN();
  });
}

void write_trains(io::Hdf5Writer& file, const std::string& group,
                  const std::vector<run::HitTrain>& trains) {
  const auto add = [&](const char* name, std::string_view units, const auto& get) {
    file.data(group + name, std::span<const double>(column(trains, get)), units);
  };
  file.group(group);
  add("/begin_s", "s", [](const run::HitTrain& train) { return train.begin_s; });
  add("/end_s", "s", [](const run::HitTrain& train) { return train.end_s; });
  add("/hits", no_unit, [](const run::HitTrain& train) { return train.hits; });
  add("/first_start_mm", "mm",
      [](const run::HitTrain& train) { return to_mm(train.first_start_m); });
  add("/climb_mm_per_hit", "mm",
      [](const run::HitTrain& train) { return to_mm(train.climb_m_per_hit); });
}

void write_events(io::Hdf5Writer& file, const Run& run, const Events& events) {
  file.group("/events");
  const auto end = [&](const std::string& group, const EndEvents& of_end) {
    file.group(group);
    write_stops(file, group + "/bottom_outs", of_end.bottom_outs);
    write_stops(file, group + "/top_outs", of_end.top_outs);
    write_trains(file, group + "/hit_trains", of_end.trains);
  };
  if (run.front) end("/events/front", events.front);
  if (run.rear) end("/events/rear", events.rear);
  const auto air = [&](const char* name, double run::Airtime::*member) {
    const auto values =
        column(events.airtimes, [&](const run::Airtime& airtime) { return airtime.*member; });
    file.data(name, std::span<const double>(values), "s");
  };
  file.group("/events/airtimes");
  air("/events/airtimes/begin_s", &run::Airtime::begin_s);
  air("/events/airtimes/end_s", &run::Airtime::end_s);
}

std::string bytes_of(const Run& run, const Events& events) {
  io::Hdf5Writer file;
  write_head(file, run);
  write_log(file, run);
  write_time(file, run);
  std::vector<std::string> on_time{"/riding"};
  if (!run.speed_m_s.empty()) on_time.emplace_back("/speed_m_s");
  const auto end = [&](const std::string& group, const std::optional<EndOfRun>& one) {
    if (!one) return;
    write_end(file, group, *one);
    for (const char* name : {"/travel_mm", "/velocity_mm_s", "/velocity_sigma_mm_s", "/valid"})
      on_time.push_back(group + name);
    if (!one->felt_m_s2.empty()) on_time.push_back(group + "/felt_m_s2");
  };
  end("/front", run.front);
  end("/rear", run.rear);
  file.axis("/time", on_time);
  write_events(file, run, events);
  return file.finish();
}

}  // namespace

void write_archive(const std::string& path, const Run& run, const Events& events) {
  io::write_atomically(path, bytes_of(run, events));
}

}  // namespace clickwise::archive
