#include <memory>

#include "clickwise/report/damper_svg.hpp"
#include "clickwise/report/damper_text.hpp"
#include "clickwise/workflow/damper_table.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

struct Arguments {
  std::string bike_path;
  Output output;
};

void run_damper(const Common& common, const Arguments& arguments) {
  const workflow::DamperReport result = workflow::damper_report(arguments.bike_path);
  print(common, arguments.output, report::damper_text(result));
  const std::string json = report::damper_json(result);
  write_json(arguments.output, json);
  if (arguments.output.folder.empty()) return;
  write_into(arguments.output.folder, "damper.json", json);
  write_into(arguments.output.folder, "damper.svg", report::damper_svg(result));
}

}  // namespace

void add_damper(CLI::App& app, Common& common) {
  auto arguments = std::make_shared<Arguments>();
  CLI::App* command = add_command(app, common, "damper",
                                  "The damper's curve, and what each click changes at each speed");
  command->add_option("BIKE.toml", arguments->bike_path, "the bike file")->required();
  add_output(*command, arguments->output, "damper.json and damper.svg");
  command->callback([&common, arguments] { run_damper(common, *arguments); });
}

}  // namespace clickwise::cli
