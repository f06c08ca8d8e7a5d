// A file that appears under its name only when it is complete.
#pragma once

#include <fstream>
#include <string>
#include <string_view>

namespace clickwise::sim {

// Writes beside the target under another name; commit() puts it in place, the destructor drops what
// was not committed. Failures are core::JobError.
class WholeFile {
public:
  explicit WholeFile(std::string path);
  ~WholeFile();
  WholeFile(const WholeFile&) = delete;
  WholeFile& operator=(const WholeFile&) = delete;

  void write(std::string_view text);
  void commit();

private:
  [[noreturn]] void fail() const;

  std::string path_;
  std::string part_;
  std::ofstream out_;
};

}  // namespace clickwise::sim
