// A log written to a file of its own for one test.
#pragma once

#include <unistd.h>

#include <filesystem>
#include <fstream>
#include <string>
#include <string_view>

namespace clickwise::test {

class LogFile {
public:
  explicit LogFile(std::string_view text) {
    static int number = 0;
    path_ =
        std::filesystem::temp_directory_path() /
        ("clickwise-log-" + std::to_string(::getpid()) + "-" + std::to_string(number++) + ".csv");
    write(text);
  }
  ~LogFile() {
    std::error_code ignored;
    std::filesystem::remove(path_, ignored);
  }
  LogFile(const LogFile&) = delete;
  LogFile& operator=(const LogFile&) = delete;

  void write(std::string_view text) const {
    std::ofstream(path_, std::ios::binary)
        .write(text.data(), static_cast<std::streamsize>(text.size()));
  }
  std::string path() const { return path_.string(); }

private:
  std::filesystem::path path_;
};

}  // namespace clickwise::test
