// Reading a bike file (TOML, schema "clickwise-bike-1"), strictly.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::bike {

// Reads and checks the file. Throws core::InputError with file, line and column for the first
// thing wrong: a syntax error, an unknown key (with the nearest known one), a wrong type, a unit or
// value out of its range, a required key that is missing.
Bike read_bike_file(const std::string& path);

// Texts of files that a bike file names, by the names it gives them.
using FilesBeside = std::map<std::string, std::string>;

// The same from text; `path` only names it in messages and anchors relative files, but for those
// that are given.
Bike parse_bike(const std::string& text, const std::string& path, const FilesBeside& beside = {});

// What the file leaves out and each missing key would bring, one sentence each, most useful first.
std::vector<std::string> what_is_missing(const Bike& bike);

}  // namespace clickwise::bike
