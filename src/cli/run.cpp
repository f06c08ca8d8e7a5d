#include "clickwise/cli/run.hpp"

#include <fmt/format.h>

#include <cstdio>
#include <new>

#include "clickwise/core/errors.hpp"
#include "command.hpp"

namespace clickwise::cli {

namespace {

constexpr int job_not_done = 1;
constexpr int input_not_read = 2;

int complain(int status, const std::string& words) {
  fmt::print(stderr, "clickwise: {}\n", words);
  return status;
}

int usage_error(const CLI::App& app, const CLI::ParseError& error) {
  if (error.get_exit_code() == 0) return app.exit(error);  // --help, --version
  std::string words = error.what();
  for (char& letter : words)
    if (letter == '\n') letter = ' ';
  return complain(input_not_read, fmt::format("command line: {}; see clickwise --help", words));
}

}  // namespace

int run(int argc, const char* const* argv) {
  CLI::App app(
      "clickwise reads the log of a mountain-bike ride and says which suspension adjuster to turn, "
      "which way, how many clicks and how sure it is - or to leave it.",
      "clickwise");
  app.set_version_flag("--version", "clickwise " CLICKWISE_VERSION);
  app.require_subcommand(1);
  Common common;
  add_review(app, common);
  add_inspect(app, common);
  add_simulate(app, common);
  add_damper(app, common);
  try {
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
  }
}

}  // namespace clickwise::cli
