// From a logged ride of one end to what the ground did to it. docs/method/replay.md, R1 to R9.
#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

// One unbroken stretch of a logged ride: shaft travel and velocity on a uniform time base, all
// finite, of the same size.
struct Stretch {
  double interval_s = 0.0;
  std::span<const double> travel_m;
  std::span<const double> velocity_m_s;
};

// What the ground did, in the frame that falls and rises with the recorded sprung mass: heights
// there need no double integration, so nothing drifts. Step n runs from instant n to n + 1;
// instant `substeps` i is sample i.
//
//   load    A_n = F_w / m_s            felt by every mass of the frame, gravity included    (R1)
//   ground  Y_n = z_n + D_n            height over the recorded sprung mass                 (R2)
struct Forcing {
  double step_s = 0.0;
  std::size_t substeps = 1;  // steps a sample
  double wheel_m = 0.0;      // wheel over sprung mass as the stretch begins
  double wheel_m_s = 0.0;
  std::vector<float> load_m_s2;
  std::vector<float> ground_m;
  std::vector<std::uint8_t> airborne;  // per step: the ground is a guess

  std::size_t steps() const { return load_m_s2.size(); }
};

struct InverseOptions {
  double longest_step_s = 1e-3;
  double least_tyre_n = 60.0;   // a recovered tyre force below it: the wheel is in the air
  double still_m_s = 0.01;      // below this shaft speed friction and platforms are not known
  double stop_margin_m = 4e-4;  // this close to the ends of the stroke the stops may carry
  double relief_m = 0.025;      // how far the unknown ground hangs below the chord; see (R8)
  double longest_hop_s = 0.2;   // a longer flight is a jump: its ground is the chord
};

// The exact inverse of ride_forward's scheme: with the same VehicleEnd it gives the ride back,
// apart from where ground or stop forces had to be guessed. The tyre and stops of `end` count.
// Fewer than 4 samples give no steps. O(samples).
Forcing recover_forcing(const VehicleEnd& end, const Stretch& stretch,
                        const InverseOptions& options = {});

}  // namespace clickwise::sim
