#include <sys/stat.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <iterator>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/atomic_file.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "support/log_file.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

std::string contents(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

// A folder of its own, empty at the start.
struct Folder {
  Folder() {
    std::filesystem::remove_all(path);
    std::filesystem::create_directories(path);
  }
  ~Folder() { std::filesystem::remove_all(path); }
  std::size_t entries() const {
    return static_cast<std::size_t>(std::distance(std::filesystem::directory_iterator(path), {}));
  }
  std::filesystem::path path =
      std::filesystem::temp_directory_path() / ("clickwise-folder-" + std::to_string(::getpid()));
};

}  // namespace

TEST_CASE("a mapped file shows the bytes of the file", "[file]") {
  const std::string text("a\0b\n", 4);
  CHECK(io::MappedFile(test::LogFile(text).path()).text() == text);
  CHECK(io::MappedFile(test::LogFile("").path()).text().empty());
}

TEST_CASE("what cannot be mapped is refused in words", "[file]") {
  CHECK_THROWS_WITH(io::MappedFile("no/such/log.csv"),
                    "no/such/log.csv: there is no such file; check the name and the folder");
  const Folder folder;
  CHECK_THROWS_WITH(io::MappedFile(folder.path.string()), Contains("is a folder, not a file"));
  const std::string pipe = (folder.path / "pipe").string();
  REQUIRE(::mkfifo(pipe.c_str(), 0600) == 0);
  CHECK_THROWS_AS(io::MappedFile(pipe), core::InputError);
  CHECK_THROWS_AS(io::MappedFile("/dev/zero"), core::InputError);
  const test::LogFile secret("1,2\n");
  REQUIRE(::chmod(secret.path().c_str(), 0) == 0);
  if (::geteuid() != 0)
    CHECK_THROWS_WITH(io::MappedFile(secret.path()), Contains("may not be read"));
}

TEST_CASE("an atomic write makes folders, replaces whole files and leaves nothing beside",
          "[file]") {
  const Folder folder;
  const std::string path = (folder.path / "a" / "review.json").string();
  io::write_atomically(path, "old");
  REQUIRE(::chmod(path.c_str(), 0640) == 0);
  io::write_atomically(path, "new contents");
  CHECK(contents(path) == "new contents");
  struct stat status {};
  REQUIRE(::stat(path.c_str(), &status) == 0);
  CHECK((status.st_mode & 0777U) == 0640U);
  CHECK(std::distance(std::filesystem::directory_iterator(folder.path / "a"), {}) == 1);
}

TEST_CASE("a failed atomic write leaves things as they were", "[file]") {
  const Folder folder;
  const std::string taken = (folder.path / "taken").string();
  std::filesystem::create_directories(taken);
  CHECK_THROWS_AS(io::write_atomically(taken, "text"), core::JobError);
  CHECK(folder.entries() == 1);
  const std::string below_file = (folder.path / "file" / "x").string();
  std::ofstream(folder.path / "file") << "kept";
  CHECK_THROWS_AS(io::write_atomically(below_file, "text"), core::JobError);
  CHECK(contents((folder.path / "file").string()) == "kept");
  CHECK_THROWS_AS(io::write_atomically("/dev/full/x", "text"), core::JobError);
}
