// A scene: the bike, the trail, the rider and the logger of an invented ride.
#pragma once

#include <cstdint>
#include <string>

#include "clickwise/bike/bike.hpp"
#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/logger.hpp"
#include "clickwise/sim/speed_plan.hpp"

namespace clickwise::sim {

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
