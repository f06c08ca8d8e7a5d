// What the `simulate` command does: an invented ride, written with its truth.
#pragma once

#include <string>
#include <vector>

namespace clickwise::workflow {

struct SimulateResult {
  std::string scene_name;
  std::string folder;
  std::vector<std::string> files;  // paths of what was written
  double seconds = 0.0;            // of riding, as logged
};

// Throws core::InputError for a scene or bike file that cannot be read, core::JobError for one that
// cannot be ridden, or a folder that cannot be written.
SimulateResult simulate(const std::string& scene_path, const std::string& folder);

}  // namespace clickwise::workflow
