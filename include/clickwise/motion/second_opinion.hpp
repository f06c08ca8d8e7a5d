// A potentiometer and an IMU pair on one end, checking each other. docs/method/imu.md, I8.
#pragma once

#include <string>
#include <vector>

#include "clickwise/run/motion.hpp"

namespace clickwise::motion {

// What the pair's velocity is against the potentiometer's, over the time when both are valid.
struct Agreement {
  double correlation = 0.0;        // -1 ... 1, after the lag; 0 where nothing moved
  double gain = 0.0;               // pair over potentiometer
  double pair_lag_s = 0.0;         // > 0: the pair is behind
  double slipped_share = 0.0;      // of blocks of two seconds with movement: correlation below 0.5
  bool usable = false;             // alike enough to be smoothed together
  std::vector<std::string> notes;  // sentences for the user: what disagreed
};

// By cross-correlation within +- 0.25 s. Both motions on the same base.
Agreement agreement(const run::Motion& potentiometer, const run::Motion& pair);

// The same motion seen earlier by lag_s: readings that came late put back in their place.
run::Motion shifted(const run::Motion& late, double lag_s);

}  // namespace clickwise::motion
