#include "clickwise/workflow/inspect.hpp"

#include <memory>

#include "clickwise/report/inspect_text.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

struct Arguments {
  std::string log_path;
  std::string bike_path;
};

}  // namespace

void add_inspect(CLI::App& app, Common& common) {
  auto arguments = std::make_shared<Arguments>();
  CLI::App* command = add_command(
      app, common, "inspect", "What a log holds; without a bike file, offers one to start from");
  command->add_option("LOG", arguments->log_path, "the log")->required();
  command->add_option("--bike", arguments->bike_path, "the bike file")->type_name("BIKE.toml");
  command->callback([&common, arguments] {
    print(common, {},
          report::inspect_text(workflow::inspect(arguments->log_path, arguments->bike_path)));
  });
}

}  // namespace clickwise::cli
