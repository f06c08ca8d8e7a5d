// A whole file as read-only text, mapped rather than copied.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace clickwise::io {

// Keeps the mapping for as long as it lives. The memory it takes is the file's size, shared with
// the system's cache. A file that another program shortens meanwhile must not be read this way.
class MappedFile {
public:
  // Throws core::InputError where there is no such file, it may not be read, or it is a folder, a
  // pipe or a device. An empty file gives empty text.
  explicit MappedFile(const std::string& path);
  ~MappedFile();
  MappedFile(const MappedFile&) = delete;
  MappedFile& operator=(const MappedFile&) = delete;

  std::string_view text() const { return {data_, size_}; }

private:
  const char* data_ = nullptr;
  std::size_t size_ = 0;
};

}  // namespace clickwise::io
