// The columns that each end's sensors need, and the motion made of them.
#pragma once

#include <optional>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/motion/imu_pair.hpp"
#include "clickwise/motion/potentiometer.hpp"
#include "clickwise/workflow/ride.hpp"

namespace clickwise::workflow {

// Which column of the log each use of the bike file wants.
struct NamedColumn {
  std::string key;  // of the bike file, for messages
  bike::ColumnRef column;
};

struct ColumnPlan {
  std::vector<NamedColumn> columns;
  std::size_t first_unit = 0;  // potentiometers and speed stand before it, inertial units from it
  std::optional<std::size_t> front_potentiometer, rear_potentiometer;
  // Counted from first_unit:
  std::optional<motion::PairChannels> front_pair, rear_pair;
  std::optional<std::size_t> hand_accel;  // of x
  std::optional<std::size_t> speed;       // counted from the start

  std::vector<bike::ColumnRef> refs() const;
};

// Potentiometers, speed, units, then the accelerometers of the sprung sides.
ColumnPlan plan_columns(const bike::Bike& bike);

struct EndMotion {
  run::Motion motion;
  run::FaultLedger faults;
  std::vector<std::string> notes;
};

struct Recordings {
  const run::Recording& travel;  // potentiometers and speed
  const run::Recording& units;
};

// One end's motion: of its potentiometer, of its IMU pair, or of both together where they agree
// (the smoother takes both, and what they say of each other is told).
EndMotion end_motion(const bike::Bike& bike, bike::EndName name, const Recordings& recordings,
                     const ColumnPlan& plan, const motion::UniformClock& clock,
                     const motion::MotionOptions& options);

// The bar's vibration over the riding time.
HandArm hand_arm(const Ride& ride, const run::Recording& units, std::size_t first_channel,
                 const motion::UniformClock& clock);

}  // namespace clickwise::workflow
