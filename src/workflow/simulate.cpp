#include "clickwise/workflow/simulate.hpp"

#include "clickwise/sim/write.hpp"

namespace clickwise::workflow {

SimulateResult simulate(const std::string& scene_path, const std::string& folder) {
  const sim::Scene scene = sim::read_scene(scene_path);
  const sim::Truth truth = sim::simulate(scene);
  return {scene.name, folder, sim::write_ride(scene, truth, folder),
          static_cast<double>(truth.samples()) / truth.rate_hz};
}

}  // namespace clickwise::workflow
