#include "clickwise/workflow/replay.hpp"

#include <memory>

#include "clickwise/report/replay_text.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

struct Arguments {
  workflow::ReplayOptions options;
  std::string map;
  Output output;
};

void run_replay(const Common& common, Arguments& arguments) {
  arguments.options.splits = workflow::parse_splits(common.splits);
  if (!arguments.map.empty()) {
    const workflow::ClickMap map = workflow::click_map(arguments.options, arguments.map);
    print(common, arguments.output, report::click_map_text(map));
    if (!arguments.output.json_file.empty())
      write_json(arguments.output, report::click_map_json(map));
    return;
  }
  const workflow::Replay replay = workflow::replay(arguments.options);
  print(common, arguments.output, report::replay_text(replay));
  if (!arguments.output.json_file.empty())
    write_json(arguments.output, report::replay_json(replay));
}

}  // namespace

void add_replay(CLI::App& app, Common& common) {
  auto arguments = std::make_shared<Arguments>();
  CLI::App* command = add_command(app, common, "replay",
                                  "What the same ground would have done with other settings");
  add_ride(*command, arguments->options.ride);
  command
      ->add_option("--set", arguments->options.settings,
                   "a setting to try, as in front.low_speed_compression=4; repeatable")
      ->expected(1)
      ->multi_option_policy(CLI::MultiOptionPolicy::TakeAll)
      ->type_name("NAME=VALUE");
  command
      ->add_option("--map", arguments->map,
                   "every setting of two adjusters of one end, as in "
                   "front.low_speed_compression,front.high_speed_compression")
      ->type_name("NAME,NAME");
  command->add_option("--seed", arguments->options.seed, "seed of what is drawn by chance")
      ->type_name("N");
  add_json_output(*command, arguments->output);
  command->callback([&common, arguments] { run_replay(common, *arguments); });
}

}  // namespace clickwise::cli
