// The document behind TomlValue and TomlTable: a plain tree that knows its places.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "clickwise/io/toml.hpp"

namespace clickwise::io {

struct TomlEntry;

struct TomlNode {
  TomlKind kind = TomlKind::table;
  std::string name;
  core::Place place;
  std::string text;  // of a text, or of a date
  double number = 0.0;
  long long integer = 0;
  bool boolean = false;
  std::vector<std::shared_ptr<const TomlNode>> items;  // of an array
  std::vector<TomlEntry> entries;                      // of a table, in the order of the file

  // What readers have asked of a table: bookkeeping for finish(), not part of the value.
  mutable std::vector<std::string> asked;
  mutable bool opened = false;
};

struct TomlEntry {
  std::string key;
  core::Place key_place;
  std::shared_ptr<const TomlNode> value;
};

}  // namespace clickwise::io
