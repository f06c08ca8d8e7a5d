// The readings of a pair's units, in SI on the uniform base. Private to motion.
#pragma once

#include <Eigen/Core>
#include <cstdint>
#include <string>
#include <vector>

#include "clickwise/motion/imu_pair.hpp"

namespace clickwise::motion {

struct UnitSeries {
  std::string name;                    // "upper" or "lower"
  std::vector<Eigen::Vector3d> accel;  // m/s^2; empty without
  std::vector<Eigen::Vector3d> gyro;   // rad/s; empty without
  std::vector<std::uint8_t> usable;    // one a base sample
  std::vector<std::int8_t> clipped;    // -1, 0, 1: the axial reading stands at its range
  double range_m_s2 = 0.0;             // found or given; infinite where neither
};

struct PairSeries {
  UnitSeries upper;
  UnitSeries lower;
  run::FaultLedger faults;
  std::vector<std::string> notes;
};

// Lays each channel on the base, straight between its readings: a channel that is sampled more
// slowly than the log leaves cells empty, and its own median step tells a hole from that. Counts
// and masks what is missing, what is frozen while the log goes on, and what stands at its range.
PairSeries pair_series(const run::Recording& recording, const PairChannels& channels,
                       const bike::ImuPair& pair, const UniformClock& clock);

// What the readings say against the bike file, as a sentence; empty when they agree.
std::string contradiction(const PairSeries& series, const bike::End& end);

// Lag and drift of the lower unit against the upper, from what both gyros feel of the frame's
// turning; where they are clear of their scatter over windows of 12 s, told in a note and taken
// out. `bearing`: of a link in the lower unit's frame, left out of the comparison; zero: a shaft.
void align_units(PairSeries& series, const Eigen::Vector3d& bearing, double rate_hz);

}  // namespace clickwise::motion
