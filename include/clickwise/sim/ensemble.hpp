// What is not known about a bike, drawn: each draw is a bike that the ride could have been on.
// docs/method/replay.md, R13.
#pragma once

#include <array>
#include <cstdint>
#include <vector>

#include "clickwise/sim/inverse.hpp"
#include "clickwise/sim/lanes.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

// Every range is uniform about the bike file's value.
struct EnsembleOptions {
  std::size_t draws = 12;  // the first is the bike as it is written; >= 1
  std::uint64_t seed = 20240607;
  double sprung_mass_share = 0.10;  // +- of it
  double tyre_share = 0.20;
  double most_friction = 2.0;     // 0 to this many times
  double least_relief_m = 0.010;  // of InverseOptions::relief_m
  double most_relief_m = 0.050;
  double longest_hop_s[2] = {0.15, 0.30};  // of InverseOptions::longest_hop_s
};

// Factors on a VehicleEnd, and what the ground under an airborne wheel is taken to be.
struct Draw {
  double sprung_mass = 1.0;
  double tyre = 1.0;
  double friction = 1.0;
  std::array<double, directions> damper{1.0, 1.0};
  double relief_m = InverseOptions{}.relief_m;
  double longest_hop_s = InverseOptions{}.longest_hop_s;
};

// Seeded; each quantity covers its range evenly, one draw to a stratum (Latin hypercube: McKay,
// Beckman and Conover, Technometrics 21:239-245, 1979). `damper_share`: +- of the damper's force,
// each direction on its own, 0 or more and below 1 (Curve::scatter_share).
std::vector<Draw> draw_ensemble(const EnsembleOptions& options, double damper_share);

// The end as drawn. An end without friction gets the draw's factor of 15 N in all draws but the
// unchanged one.
VehicleEnd drawn(const VehicleEnd& end, const Draw& draw);

}  // namespace clickwise::sim
