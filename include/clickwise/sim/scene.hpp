// A scene: the bike, the trail, the rider and the logger of an invented ride.
#pragma once

#include <cstdint>
#include <string>

#include "clickwise/bike/bike.hpp"
#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/logger.hpp"
#include "clickwise/sim/speed_plan.hpp"

namespace clickwise::sim {

// The keys of a scene, with their defaults where they have one:
//
//   schema = "clickwise-scene-1"   bike = "bike.toml"   name = ""   seed = 1   step_ms = 0.1
//   set = { "front.high_speed_compression" = 4 }
//   [ride]     length_m or duration_s; speed = [[m, m/s], ...] or speed_over_time = [[s, m/s],
//   ...];
//              pace = 1.0, stand_before_s = 0, stand_after_s = 0,
//              line = { seed = 0, change = 0.15 }
//   [ground]   class = "smooth" or "A" to "H"; wheel_radius_m = 0.36, contact_length_m = 0.1
//   [[ground.section]]   from_m, to_m, class
//   [[ground.feature]]   kind, at_m, and
//              rock: height_m, length_m, shape = "half_sine" or "trapezoid"
//              rock_garden: length_m, per_m, height_m
//              roots: height_m, count, length_m = 0.1 (of one), spacing_m = 0.6
//              kicker: height_m, length_m, drop_m = 0;   drop: height_m
//              compression: depth_m, length_m
//   [logger]   rate_hz = 1000, adc_bits = 12, noise_counts = 0, jitter = 0, time_decimals = 0,
//              clock_start = 0, wrap_u32 = false, extra_columns = [],
//              accel = { noise_g = 0, bias_g = 0, range_g = 64, decimals = 4 },
//              extra_decimals = 0
//   [[logger.fault]]     kind (those of log.faults), at_s; seconds (gap, stuck, saturated,
//   missing);
//              column (spike, stuck, saturated, missing); counts = 1500 (spike)
struct Scene {
  std::string file;  // as given; for messages
  std::string name;
  std::uint64_t seed = 1;
  bike::Bike bike;  // with the scene's `set` applied, its text too
  GroundPlan ground;
  Rolling rolling;
  SpeedPlan speed;
  LoggerPlan logger;
  double step_s = 1e-4;  // largest step of the integrator
};

// Reads a scene (TOML, schema "clickwise-scene-1") and its bike file, whose path is relative to the
// scene's folder. Throws core::InputError with file, line and column for the first thing wrong.
Scene read_scene(const std::string& path);

// The same from text; `path` names it in messages and anchors the bike file.
Scene parse_scene(const std::string& text, const std::string& path);

}  // namespace clickwise::sim
