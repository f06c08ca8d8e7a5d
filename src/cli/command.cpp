#include "command.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <cstdio>
#include <cstdlib>
#include <filesystem>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/atomic_file.hpp"

namespace clickwise::cli {

CLI::App* add_command(CLI::App& app, Common& common, const std::string& name,
                      const std::string& does) {
  CLI::App* command = app.add_subcommand(name, does);
  command
      ->add_option("--split", common.splits,
                   "speed that parts low from high, mm/s; or END.DIRECTION=SPEED; repeatable")
      ->expected(1)
      ->multi_option_policy(CLI::MultiOptionPolicy::TakeAll)
      ->type_name("SPEED");
  command->add_flag("--quiet", common.quiet, "print no summary");
  return command;
}

void add_output(CLI::App& command, Output& output, const std::string& writes) {
  command.add_option("-o,--output", output.folder, "folder to write " + writes + " into")
      ->type_name("DIR");
  add_json_output(command, output);
}

void add_json_output(CLI::App& command, Output& output) {
  command.add_option("--json", output.json_file, "file to write the JSON to; - prints it alone")
      ->type_name("FILE");
}

void write_json(const Output& output, const std::string& json) {
  if (output.json_file.empty()) return;
  if (output.json_file != "-") {
    io::write_whole(output.json_file, json);
    return;
  }
  std::fwrite(json.data(), 1, json.size(), stdout);
  if (std::fflush(stdout) != 0)
    throw core::JobError({"stdout"}, "the JSON could not be written", "check where it is piped to");
}

std::string write_into(const std::string& folder, const std::string& file,
                       const std::string& text) {
  std::error_code error;
  std::filesystem::create_directories(folder, error);
  if (error)
    throw core::InputError({folder}, "the folder cannot be made: " + error.message(),
                           "give -o a folder you may write to");
  const std::string path = (std::filesystem::path(folder) / file).string();
  io::write_whole(path, text);
  return path;
}

void print(const Common& common, const Output& output, const std::string& text) {
  if (common.quiet || output.json_file == "-") return;
  std::fwrite(text.data(), 1, text.size(), stdout);
}

bool emphasis_on_stdout() {
  const char* const no_color = std::getenv("NO_COLOR");
  return isatty(STDOUT_FILENO) != 0 && (no_color == nullptr || *no_color == '\0');
}

}  // namespace clickwise::cli
