// Travel and velocity of an end with two inertial units. docs/method/imu.md.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/motion/time_base.hpp"
#include "clickwise/run/motion.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::motion {

// Where the units' readings stand in a recording: the channel of x; y and z follow.
struct UnitChannels {
  std::optional<std::size_t> accel;
  std::optional<std::size_t> gyro;
};

struct PairChannels {
  UnitChannels upper;
  UnitChannels lower;
};

// A potentiometer on the same end: a second opinion, which sees travel where the units do not.
struct SecondOpinion {
  const run::Motion* potentiometer = nullptr;
  std::string channel;
};

struct ImuMotion {
  run::Motion motion;
  run::FaultLedger faults;
  std::vector<std::string> notes;  // sentences for the user
};

// The motion on the clock's base.
//
// Sliding: relative acceleration along the shaft, mounting and rotation taken out (I1-I3), through
// a Kalman filter and a Rauch-Tung-Striebel smoother with states travel, velocity and bias (I4)
// that also knows what a shaft can do: 0 <= x <= stroke, topped out when the upper unit is pulled
// down, and that the force which the upper unit feels rises with travel and velocity by one curve
// that the log itself teaches (I5, I6). Swinging: the difference of the gyros is the swing rate,
// and geometry makes it shaft velocity (I7).
//
// Readings at the unit's range count as saturated and are rebuilt with a wide sigma (I4); units
// that give nothing are masked. A pair whose readings contradict the bike file (axis, units, upper
// and lower) is left out: nothing is valid, and a note says what to change. sprung_mass_kg sharpens
// the sag; empty: 27 % of the stroke is taken. Velocity comes with its sigma; travel_known only
// where sigma of the travel is below 5 % of the stroke. Measured errors: docs/accuracy.md. Throws
// std::invalid_argument when end.imu is empty. O(samples).
ImuMotion from_imu_pair(const run::Recording& recording, const PairChannels& channels,
                        const bike::End& end, std::optional<double> sprung_mass_kg,
                        const UniformClock& clock, const SecondOpinion& second = {});

}  // namespace clickwise::motion
