// What `inspect` tells of an archive.
#pragma once

#include <string>

#include "clickwise/logs/facts.hpp"

namespace clickwise::workflow {

// Its series as columns, their ranges over valid samples. Throws core::InputError as
// archive::read_archive does.
logs::LogFacts archived_facts(const std::string& path);

}  // namespace clickwise::workflow
