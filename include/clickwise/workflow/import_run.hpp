// What the `import` command does: the cleaned run, kept as an archive.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "clickwise/workflow/ride.hpp"

namespace clickwise::workflow {

struct ImportOptions {
  RideOptions ride;
  std::string archive_path;
  std::string program;  // who writes, "clickwise 1.2.3"
};

struct Import {
  std::string archive_path;
  std::size_t bytes = 0;
  LogSummary log;
  std::vector<bike::EndName> ends;
  std::vector<std::string> notes;
};

// Reads the log, or an archive, and writes the archive whole or not at all. Throws what load_ride
// throws; core::JobError where the archive cannot be written.
Import import_run(const ImportOptions& options);

}  // namespace clickwise::workflow
