#include "clickwise/cli/run.hpp"

#include <fmt/format.h>

#include <cstdio>
#include <exception>
#include <new>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/utf8.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

constexpr int job_not_done = 1;
constexpr int input_not_read = 2;

// One line, whatever bytes of a broken log are quoted in it.
int complain(int status, const std::string& words) {
  std::string line = core::as_utf8(words);
  for (char& letter : line)
    if (static_cast<unsigned char>(letter) < 0x20 || letter == 0x7F) letter = ' ';
  fmt::print(stderr, "clickwise: {}\n", line);
  return status;
}

// The command that was being given, as in "clickwise review --help".
std::string help_of(const CLI::App& app) {
  const auto given = app.get_subcommands();
  return "see clickwise " + (given.empty() ? "" : given.front()->get_name() + " ") + "--help";
}

int usage_error(const CLI::App& app, const CLI::ParseError& error) {
  if (error.get_exit_code() == 0) return app.exit(error);  // --help, --version
  return complain(input_not_read, fmt::format("command line: {}; {}", error.what(), help_of(app)));
}

// A first word that is no command, in place of the parser's "a subcommand is required".
void refuse_unknown_command(const CLI::App& app, int argc, const char* const* argv) {
  const std::string word = argc > 1 ? argv[1] : "";
  if (word.starts_with('-')) return;
  std::string names;
  for (const CLI::App* command : app.get_subcommands({})) {
    if (command->get_name() == word) return;
    names += (names.empty() ? "" : ", ") + command->get_name();
  }
  throw core::InputError({"command line"},
                         word.empty() ? "a command is missing" : "there is no command " + word,
                         "the commands are " + names + "; see clickwise --help");
}

}  // namespace

int run(int argc, const char* const* argv) {
  CLI::App app(
      "clickwise reads the log of a mountain-bike ride and says which suspension adjuster to turn, "
      "which way, how many clicks and how sure it is - or to leave it.",
      "clickwise");
  app.set_version_flag("--version", program_version);
  app.require_subcommand(1);
  Common common;
  add_review(app, common);
  add_inspect(app, common);
  add_simulate(app, common);
  add_damper(app, common);
  add_replay(app, common);
  add_import(app, common);
  try {
    refuse_unknown_command(app, argc, argv);
    app.parse(argc, argv);
    return 0;
  } catch (const CLI::ParseError& error) {
    return usage_error(app, error);
  } catch (const core::InputError& error) {
    return complain(input_not_read, error.what());
  } catch (const core::JobError& error) {
    return complain(job_not_done, error.what());
  } catch (const std::bad_alloc&) {
    return complain(job_not_done,
                    "memory: there is not enough of it for this job; close other "
                    "programs or cut the log in two");
  } catch (const std::exception& error) {
    return complain(job_not_done,
                    fmt::format("internal fault: {}; keep the log and the bike file, and report it",
                                error.what()));
  }
}

}  // namespace clickwise::cli
