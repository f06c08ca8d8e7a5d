// A column of a log, as a bike file names it.
#pragma once

#include <string>

namespace clickwise::bike {

// By its header's name, or by number counted from 1 (name empty).
struct ColumnRef {
  std::string name;
  int number = 0;

  // The name, or "column 3".
  std::string label() const;
  bool operator==(const ColumnRef&) const = default;
};

}  // namespace clickwise::bike
