// The two errors that may cross a module's face: input that cannot be read, and a job that cannot
// be done. Damaged data is neither: it becomes a fault (run/fault.hpp) and the work goes on.
#pragma once

#include <stdexcept>
#include <string>

namespace clickwise::core {

// Where in a file something stands. Line and column count from 1; 0 means "the file as a whole".
struct Place {
  std::string file;
  int line = 0;
  int column = 0;
};

// "file[:line[:column]]"
std::string to_string(const Place& place);

// Wrong usage or unreadable input; the command exits with status 2.
// what() is "<file>[:line[:column]]: <what is wrong>; <what to do about it>".
class InputError : public std::runtime_error {
 public:
  InputError(Place place, const std::string& wrong, const std::string& remedy);
  const Place& place() const { return place_; }

 private:
  Place place_;
};

// The input was understood but the job could not be done; the command exits with status 1.
// The wording of what() is as for InputError.
class JobError : public std::runtime_error {
 public:
  JobError(Place place, const std::string& wrong, const std::string& remedy);
  const Place& place() const { return place_; }

 private:
  Place place_;
};

}  // namespace clickwise::core
