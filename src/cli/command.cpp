#include "command.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <cstdio>
#include <cstdlib>
#include <filesystem>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/atomic_file.hpp"
#include "clickwise/workflow/splits.hpp"

namespace clickwise::cli {

namespace {

void write_to_stdout(const std::string& text) {
  const std::size_t written = std::fwrite(text.data(), 1, text.size(), stdout);
  if (written != text.size() || std::fflush(stdout) != 0 || std::ferror(stdout) != 0)
    throw core::JobError({"stdout"}, "the output could not be written", "check where it is sent");
}

CLI::Validator not_empty() {
  return CLI::Validator(
      [](const std::string& text) { return text.empty() ? std::string("is empty") : ""; }, "");
}

}  // namespace

CLI::App* add_command(CLI::App& app, Common& common, const std::string& name,
                      const std::string& does) {
  CLI::App* command = app.add_subcommand(name, does);
  command
      ->add_option("--split", common.splits,
                   "speed that parts low from high, mm/s; or END.DIRECTION=SPEED; repeatable")
      ->expected(1)
      ->multi_option_policy(CLI::MultiOptionPolicy::TakeAll)
      ->type_name("SPEED")
      ->each([](const std::string& text) { workflow::parse_splits({text}); });
  command->add_flag("--quiet", common.quiet, "print no summary");
  command->set_version_flag("--version", program_version);
  return command;
}

void add_ride(CLI::App& command, workflow::RideOptions& ride) {
  command.add_option("LOG", ride.log_path, "the log of the run, or its archive")->required();
  command.add_option("--bike", ride.bike_path, "the bike file; an archive brings its own")
      ->type_name("BIKE.toml")
      ->check(not_empty());
}

void add_output(CLI::App& command, Output& output, const std::string& writes) {
  command.add_option("-o,--output", output.folder, "folder to write " + writes + " into")
      ->type_name("DIR")
      ->check(not_empty());
  add_json_output(command, output);
}

void add_json_output(CLI::App& command, Output& output) {
  command.add_option("--json", output.json_file, "file to write the JSON to; - prints it alone")
      ->type_name("FILE")
      ->check(not_empty());
}

void write_json(const Output& output, const std::string& json) {
  if (output.json_file.empty()) return;
  if (output.json_file != "-") {
    io::write_atomically(output.json_file, json);
    return;
  }
  write_to_stdout(json);
}

std::string write_into(const std::string& folder, const std::string& file,
                       const std::string& text) {
  const std::string path = (std::filesystem::path(folder) / file).string();
  io::write_atomically(path, text);
  return path;
}

void print(const Common& common, const Output& output, const std::string& text) {
  if (common.quiet || output.json_file == "-") return;
  write_to_stdout(text);
}

bool emphasis_on_stdout() {
  const char* const no_color = std::getenv("NO_COLOR");
  return isatty(STDOUT_FILENO) != 0 && (no_color == nullptr || *no_color == '\0');
}

}  // namespace clickwise::cli
