#include <memory>

#include "clickwise/report/import_text.hpp"
#include "clickwise/workflow/import_run.hpp"
#include "command.hpp"

namespace clickwise::cli {

void add_import(CLI::App& app, Common& common) {
  auto options = std::make_shared<workflow::ImportOptions>();
  CLI::App* command = add_command(
      app, common, "import", "The cleaned run as an archive that every command takes for a log");
  add_ride(*command, options->ride);
  command->add_option("-o,--output", options->archive_path, "the archive to write")
      ->required()
      ->type_name("RUN.h5");
  command->callback([&common, options] {
    options->program = program_version;
    const workflow::Import result = workflow::import_run(*options);
    print(common, {}, report::import_text(result));
  });
}

}  // namespace clickwise::cli
