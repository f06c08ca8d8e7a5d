// What the commands share: their common options, and where their results go.
#pragma once

#include <CLI/CLI.hpp>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/workflow/ride.hpp"

namespace clickwise::cli {

inline constexpr const char* program_version = "clickwise " CLICKWISE_VERSION;

// Options every command takes.
struct Common {
  std::vector<std::string> splits;
  bool quiet = false;
};

// A result's two homes: a folder, and a JSON file ("-" is stdout).
struct Output {
  std::string folder;
  std::string json_file;
};

// A subcommand with the common options on it.
CLI::App* add_command(CLI::App& app, Common& common, const std::string& name,
                      const std::string& does);

// LOG and --bike.
void add_ride(CLI::App& command, workflow::RideOptions& ride);

void add_output(CLI::App& command, Output& output, const std::string& writes);
void add_json_output(CLI::App& command, Output& output);

// Writes text to the JSON file, whole or not at all, or to stdout; nothing when none was asked for.
void write_json(const Output& output, const std::string& json);

// Makes the folder where it is missing and writes a file into it, whole or not at all. Gives the
// file's path.
std::string write_into(const std::string& folder, const std::string& file, const std::string& text);

// Prints a summary, unless --quiet, or the JSON has stdout to itself.
void print(const Common& common, const Output& output, const std::string& text);

// Whether stdout takes emphasis: a terminal, and NO_COLOR not set.
bool emphasis_on_stdout();

void add_review(CLI::App& app, Common& common);
void add_inspect(CLI::App& app, Common& common);
void add_simulate(CLI::App& app, Common& common);
void add_damper(CLI::App& app, Common& common);
void add_replay(CLI::App& app, Common& common);
void add_import(CLI::App& app, Common& common);

}  // namespace clickwise::cli
