// The program as a command line.
#pragma once

namespace clickwise::cli {

// Runs one command and gives the exit status: 0 done; 1 understood, but the job could not be done;
// 2 wrong usage or unreadable input. Results go to stdout, errors to stderr.
int run(int argc, const char* const* argv);

}  // namespace clickwise::cli
