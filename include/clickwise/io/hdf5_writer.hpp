// Writing an HDF5 file in memory, to be put in its place whole (io/atomic_file.hpp).
#pragma once

#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace clickwise::io {

// Names are paths from the root; the groups in front must be there. Data sets are cut into chunks,
// their bytes sorted by place (shuffle), deflated and given a checksum (of floats it is zlib's);
// lists without entries and single texts are stored plain, the latter with their CRC-32 beside
// `units`. Every data set gets its `units`. Readable by HDF5 1.8 (2008) and later. A failure of the
// library is a std::runtime_error: nothing that a user gives causes one.
class Hdf5Writer {
public:
  Hdf5Writer();
  ~Hdf5Writer();
  Hdf5Writer(const Hdf5Writer&) = delete;
  Hdf5Writer& operator=(const Hdf5Writer&) = delete;

  void group(const std::string& name);
  void data(const std::string& name, std::span<const double> values, std::string_view units);
  void data(const std::string& name, std::span<const float> values, std::string_view units);
  void data(const std::string& name, std::span<const std::uint8_t> values, std::string_view units);
  void data(const std::string& name, std::span<const std::int64_t> values, std::string_view units);
  void text(const std::string& name, std::string_view text, std::string_view units);
  void texts(const std::string& name, const std::vector<std::string>& texts,
             std::string_view units);

  void attribute(const std::string& name, const char* attribute, std::string_view text);
  void attribute(const std::string& name, const char* attribute, double number);

  // Makes a data set the axis of others (a dimension scale of the HDF5 specification).
  void axis(const std::string& name, const std::vector<std::string>& of);

  // The bytes of the whole file; the writer takes nothing more.
  std::string finish();

private:
  struct Open;
  std::unique_ptr<Open> open_;
};

}  // namespace clickwise::io
