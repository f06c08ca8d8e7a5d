#include "clickwise/workflow/simulate.hpp"

#include <memory>

#include "clickwise/report/simulate_text.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

struct Arguments {
  std::string scene_path;
  Output output;
};

}  // namespace

void add_simulate(CLI::App& app, Common& common) {
  auto arguments = std::make_shared<Arguments>();
  CLI::App* command =
      add_command(app, common, "simulate",
                  "An invented ride with known truth, for trying settings and for tests");
  command->add_option("SCENE.toml", arguments->scene_path, "the scene file")->required();
  command
      ->add_option("-o,--output", arguments->output.folder,
                   "folder to write log.csv, bike.toml, truth.csv and truth.toml into")
      ->required()
      ->type_name("DIR");
  command->callback([&common, arguments] {
    print(
        common, arguments->output,
        report::simulate_text(workflow::simulate(arguments->scene_path, arguments->output.folder)));
  });
}

}  // namespace clickwise::cli
