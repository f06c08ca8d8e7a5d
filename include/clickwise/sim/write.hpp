// An invented ride on disk, beside its truth.
#pragma once

#include <string>
#include <vector>

#include "clickwise/sim/ride.hpp"
#include "clickwise/sim/scene.hpp"

namespace clickwise::sim {

// Writes into the folder, made if need be: log.csv, bike.toml (the scene's bike file with its
// changed clicks), truth.csv (t_s, and for each end front_/rear_ travel_mm, velocity_mm_s,
// tyre_force_n, ground_mm at the truth's rate) and truth.toml (bands at the default split, travel,
// airtime, bottom-outs). Each file appears whole or not at all. Returns their paths in that order.
// Throws core::JobError when a file cannot be written.
std::vector<std::string> write_ride(const Scene& scene, const Truth& truth,
                                    const std::string& folder);

}  // namespace clickwise::sim
