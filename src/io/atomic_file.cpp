#include "clickwise/io/atomic_file.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <filesystem>
#include <vector>

#include "clickwise/core/errors.hpp"

namespace clickwise::io {

namespace {

[[noreturn]] void refuse(const std::string& path, const std::string& reason) {
  throw core::JobError({path}, "cannot be written (" + reason + ")",
                       "check the folder, its permissions and the room on the disk");
}

// A file beside the wanted one that disappears unless it is renamed into place.
class Draft {
public:
  explicit Draft(const std::string& path) : target_(path), name_(path + ".XXXXXX") {
    descriptor_ = ::mkostemp(name_.data(), O_CLOEXEC);
    if (descriptor_ < 0) refuse(target_, std::strerror(errno));
  }
  ~Draft() {
    if (descriptor_ >= 0) ::close(descriptor_);
    if (!placed_) ::unlink(name_.c_str());
  }
  Draft(const Draft&) = delete;
  Draft& operator=(const Draft&) = delete;

  void write(std::string_view contents) {
    while (!contents.empty()) {
      const ssize_t written = ::write(descriptor_, contents.data(), contents.size());
      if (written < 0 && errno == EINTR) continue;
      if (written < 0) refuse(target_, std::strerror(errno));
      contents.remove_prefix(static_cast<std::size_t>(written));
    }
  }

  void place() {
    ::fchmod(descriptor_, target_mode());
    if (::fsync(descriptor_) != 0) refuse(target_, std::strerror(errno));
    const int closed = ::close(descriptor_);
    descriptor_ = -1;
    if (closed != 0) refuse(target_, std::strerror(errno));
    if (::rename(name_.c_str(), target_.c_str()) != 0) refuse(target_, std::strerror(errno));
    placed_ = true;
  }

private:
  // That of the file replaced, or read and write for the owner and read for the rest.
  mode_t target_mode() const {
    struct stat status {};
    return ::stat(target_.c_str(), &status) == 0 ? status.st_mode & 07777U : 0644U;
  }

  std::string target_;
  std::string name_;
  int descriptor_ = -1;
  bool placed_ = false;
};

// The rename itself must reach the disk too; a file system that cannot do so is no error.
void sync_folder(const std::filesystem::path& folder) {
  const int descriptor = ::open(folder.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  if (descriptor < 0) return;
  ::fsync(descriptor);
  ::close(descriptor);
}

}  // namespace

void write_atomically(const std::string& path, std::string_view contents) {
  std::filesystem::path folder = std::filesystem::path(path).parent_path();
  if (folder.empty()) folder = ".";
  std::error_code error;
  std::filesystem::create_directories(folder, error);
  if (error) refuse(path, error.message());
  Draft draft(path);
  draft.write(contents);
  draft.place();
  sync_folder(folder);
}

}  // namespace clickwise::io
