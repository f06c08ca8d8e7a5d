#include "whole_file.hpp"

#include <filesystem>
#include <system_error>

#include "clickwise/core/errors.hpp"

namespace clickwise::sim {

WholeFile::WholeFile(std::string path)
    : path_(std::move(path)),
      part_(path_ + ".part"),
      out_(part_, std::ios::binary | std::ios::trunc) {
  if (!out_) fail();
}

WholeFile::~WholeFile() {
  if (part_.empty()) return;
  out_.close();
  std::error_code ignored;
  std::filesystem::remove(part_, ignored);
}

void WholeFile::write(std::string_view text) {
  out_.write(text.data(), static_cast<std::streamsize>(text.size()));
  if (!out_) fail();
}

void WholeFile::commit() {
  out_.close();
  std::error_code error;
  if (out_) std::filesystem::rename(part_, path_, error);
  if (!out_ || error) fail();
  part_.clear();
}

void WholeFile::fail() const {
  throw core::JobError({path_}, "cannot be written", "check the folder, its permissions and space");
}

}  // namespace clickwise::sim
