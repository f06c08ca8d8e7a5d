// The parts of a scene file.
#pragma once

#include "clickwise/io/toml.hpp"
#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/logger.hpp"
#include "clickwise/sim/speed_plan.hpp"

namespace clickwise::sim {

GroundPlan read_ground(const io::TomlTable& ground);
Rolling read_rolling(const io::TomlTable& ground);
SpeedPlan read_ride(const io::TomlTable& ride);
Line read_line(const io::TomlTable& ride);
LoggerPlan read_logger(const io::TomlTable& logger);

// A seed: a whole number from 0.
std::uint64_t read_seed(const io::TomlTable& table, std::uint64_t otherwise);

}  // namespace clickwise::sim
