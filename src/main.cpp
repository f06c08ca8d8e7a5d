#include <unistd.h>

#include <csignal>
#include <string_view>

#include "clickwise/cli/run.hpp"

namespace {

// Reading a mapped file that another program cuts short meanwhile ends in SIGBUS. Only what is
// allowed in a signal handler is used; output files stand beside their names until they are whole.
extern "C" void tell_of_shortened_file(int) {
  constexpr std::string_view message =
      "clickwise: a log became shorter while it was read; let the copy finish, then try again\n";
  [[maybe_unused]] const ssize_t written = ::write(STDERR_FILENO, message.data(), message.size());
  ::_exit(2);
}

}  // namespace

int main(int argc, char** argv) {
  std::signal(SIGBUS, tell_of_shortened_file);
  return clickwise::cli::run(argc, argv);
}
