#include "clickwise/io/mapped_file.hpp"

#include <fcntl.h>
#include <sys/mman.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>

#include "clickwise/core/errors.hpp"

namespace clickwise::io {

namespace {

class Descriptor {
public:
  // Non-blocking, so that a pipe without a writer is refused rather than waited for.
  explicit Descriptor(const std::string& path)
      : number_(::open(path.c_str(), O_RDONLY | O_CLOEXEC | O_NONBLOCK)) {}
  ~Descriptor() {
    if (number_ >= 0) ::close(number_);
  }
  Descriptor(const Descriptor&) = delete;
  Descriptor& operator=(const Descriptor&) = delete;
  int number() const { return number_; }

private:
  int number_;
};

[[noreturn]] void refuse_open(const std::string& path, int code) {
  if (code == ENOENT || code == ENOTDIR)
    throw core::InputError({path}, "there is no such file", "check the name and the folder");
  if (code == EACCES || code == EPERM)
    throw core::InputError({path}, "the file may not be read", "check its permissions");
  throw core::InputError({path}, std::string("cannot be opened (") + std::strerror(code) + ")",
                         "check the name and the disk");
}

std::size_t regular_size(const std::string& path, int descriptor) {
  struct stat status {};
  if (::fstat(descriptor, &status) != 0) refuse_open(path, errno);
  if (S_ISDIR(status.st_mode))
    throw core::InputError({path}, "is a folder, not a file", "name a file in it");
  if (!S_ISREG(status.st_mode))
    throw core::InputError({path}, "is a pipe or a device, not a file",
                           "save what it gives to a file first");
  return static_cast<std::size_t>(status.st_size);
}

}  // namespace

MappedFile::MappedFile(const std::string& path) {
  const Descriptor file(path);
  if (file.number() < 0) refuse_open(path, errno);
  size_ = regular_size(path, file.number());
  if (size_ == 0) return;
  void* const mapping = ::mmap(nullptr, size_, PROT_READ, MAP_PRIVATE, file.number(), 0);
  if (mapping == MAP_FAILED) refuse_open(path, errno);
  data_ = static_cast<const char*>(mapping);
  // Only hints: their failure changes nothing but speed.
  ::madvise(mapping, size_, MADV_WILLNEED);
}

MappedFile::~MappedFile() {
  if (data_) ::munmap(const_cast<char*>(data_), size_);
}

}  // namespace clickwise::io
