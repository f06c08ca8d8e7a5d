// The click map of a 10 minute, 1 kHz ride: 16 x 12 settings over the recovered ground, in lanes
// and by the plain loop of the same model. `--forcing FILE` writes 20 s of the ground for
// replay_solve_ivp.py.
#include <fmt/format.h>

#include <chrono>
#include <cstdio>
#include <cstring>
#include <ctime>

#include "clickwise/core/parallel.hpp"
#include "clickwise/sim/forward.hpp"
#include "clickwise/sim/replay.hpp"
#include "sim/replay_rides.hpp"

using namespace clickwise;
using namespace clickwise::replay_rides;

namespace {

double processor_s() {
  timespec now{};
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
  return static_cast<double>(now.tv_sec) + 1e-9 * static_cast<double>(now.tv_nsec);
}

struct Clock {
  std::chrono::steady_clock::time_point wall = std::chrono::steady_clock::now();
  double processor = processor_s();

  double wall_s() const {
    return std::chrono::duration<double>(std::chrono::steady_clock::now() - wall).count();
  }
  double used_s() const { return processor_s() - processor; }
};

std::vector<sim::VehicleEnd> map_of(const Parts& base) {
  std::vector<sim::VehicleEnd> settings;
  for (int bleed = 0; bleed < 16; ++bleed)
    for (int valve = 0; valve < 12; ++valve) {
      Parts parts = base;
      parts.damper.compression.bleed->setting = bleed;
      parts.damper.compression.valve->setting = valve;
      settings.push_back(parts.vehicle());
    }
  return settings;
}

void write_side(std::FILE* file, const char* name, const damper::Law& law) {
  fmt::print(file, "\"{}\": [{}, {}, {}, {}],\n", name, law.bleed_m_s, law.opening_n,
             law.slope_n_s_m, law.port_n_s2_m2);
}

void write_forcing(const char* path, const sim::VehicleEnd& end, const sim::Forcing& forcing) {
  std::FILE* file = std::fopen(path, "w");
  if (file == nullptr) return;
  fmt::print(file, "{{\"sprung_kg\": {}, \"unsprung_kg\": {}, \"friction_n\": {},\n",
             end.sprung_mass_kg, end.unsprung_mass_kg, end.friction_n);
  fmt::print(file, "\"tyre\": [{}, {}], \"stop\": [{}, {}], \"step_s\": {},\n",
             end.tyre.stiffness_n_m, end.tyre.damping_n_s_m, end.stop.stiffness_n_m,
             end.stop.loss_s_m, forcing.step_s);
  write_side(file, "compression", end.curve.compression);
  write_side(file, "rebound", end.curve.rebound);
  fmt::print(file, "\"start\": [{}, {}], \"cell_m\": {}, \"spring_n\": [", forcing.wheel_m,
             forcing.wheel_m_s, end.table.cell_m);
  for (std::size_t i = 0; i < end.table.nodes.size(); ++i)
    fmt::print(file, "{}{}", i > 0 ? "," : "", end.table.nodes[i].spring_n);
  const auto series = [&](const char* name, const std::vector<float>& values) {
    fmt::print(file, "],\n\"{}\": [", name);
    for (std::size_t i = 0; i < std::min<std::size_t>(values.size(), 20000); ++i)
      fmt::print(file, "{}{}", i > 0 ? "," : "", values[i]);
  };
  series("ground_m", forcing.ground_m);
  series("load_m_s2", forcing.load_m_s2);
  fmt::print(file, "]}}\n");
  std::fclose(file);
}

}  // namespace

int main(int argc, char** argv) {
  const Ride ride = ride_number(11, 1, 600.0);
  const auto truth = ride.truth(ride.parts);
  const Log log = log_of(truth, ride.parts.end.stroke_m, 1);
  const std::vector<std::uint8_t> all(log.travel_m.size(), 1);
  const sim::VehicleEnd end = ride.parts.vehicle();
  const sim::ReplayInput input{.end = end,
                               .interval_s = 1e-3,
                               .travel_m = log.travel_m,
                               .velocity_m_s = log.velocity_m_s,
                               .valid = all,
                               .counted = all};
  const auto settings = map_of(ride.parts);
  sim::ReplayOptions options;
  options.ensemble.draws = 1;

  const Clock map_clock;
  const auto map = sim::replay(input, settings, options);
  fmt::print("map of {} settings, {:.0f} s of {}: {:.2f} s, {:.2f} s of processor, {} cores\n",
             map.predictions.size(), map.replayed_s, ride.name, map_clock.wall_s(),
             map_clock.used_s(), core::worker_count());

  const Clock advice_clock;
  const auto advice = sim::replay(input, std::span(settings).first(24));
  fmt::print("24 settings with their ensemble: {:.2f} s, {:.2f} s of processor\n",
             advice_clock.wall_s(), advice_clock.used_s());

  const Clock inverse_clock;
  const auto forcing = sim::recover_forcing(end, {1e-3, log.travel_m, log.velocity_m_s});
  const double steps = static_cast<double>(forcing.steps());
  fmt::print("inverse: {:.0f} ns a step\n", 1e9 * inverse_clock.used_s() / steps);

  std::vector<std::uint8_t> counted(log.travel_m.size(), 1);
  const sim::LaneStretch stretch{forcing, 0, counted};
  sim::TallyPlan plan;
  plan.interval_s = 1e-3;
  plan.stroke_m = end.stroke_m;
  const Clock lane_clock;
  const auto tallies = sim::ride_lanes(std::span(settings).first(64), std::span(&stretch, 1), plan);
  const double lane_ns = 1e9 * lane_clock.used_s() / steps / static_cast<double>(tallies.size());

  const Clock plain_clock;
  double sum = 0.0;
  constexpr int repeats = 3;
  for (int i = 0; i < repeats; ++i) sum += sim::ride_forward(settings[80], forcing).travel_m.back();
  const double plain_ns = 1e9 * plain_clock.used_s() / steps / repeats;
  fmt::print(
      "lanes: {:.1f} ns a lane and step, counting included: {:.1f} million lane-steps a "
      "second and core\nplain loop: {:.0f} ns a step, without counting (ends at {:.3f} m): "
      "the lanes are {:.1f} times as fast on one core\n",
      lane_ns, 1e3 / lane_ns, plain_ns, sum / repeats, plain_ns / lane_ns);
  fmt::print("one setting, one second of ride: {:.3g} s of one core in lanes\n", lane_ns * 1e-6);
  if (argc == 3 && std::strcmp(argv[1], "--forcing") == 0) write_forcing(argv[2], end, forcing);
}
