#include "clickwise/cli/run.hpp"

int main(int argc, char** argv) { return clickwise::cli::run(argc, argv); }
