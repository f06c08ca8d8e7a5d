// Reading HDF5 files with care: ours, and those of other programs.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace clickwise::io {

// Whether these bytes begin an HDF5 file: the signature stands at byte 0, or at 512, 1024, 2048 …
// behind a user block (HDF5 file format specification 3.0, II.A).
bool is_hdf5(std::string_view bytes);

enum class Hdf5Kind { group, numbers, text, other };

// A member of a group.
struct Hdf5Item {
  std::string name;  // its last part
  Hdf5Kind kind = Hdf5Kind::other;
  std::string type;                // "float32", "int16", "text"; empty for a group
  std::vector<std::size_t> shape;  // lengths of a data set; empty: a single value
  std::string units;               // the text of its attribute `units`; empty without one
};

// A data set of numbers, each to be multiplied.
struct Hdf5Scaled {
  std::string name;
  double scale = 1.0;
};

// An open file. Names are paths from the root, "/front/travel_mm". Every failure is a
// core::InputError naming the file. The library underneath takes one caller at a time: calls from
// several threads wait for each other.
class Hdf5File {
public:
  // Refuses what is no HDF5 file, or is one cut off or damaged at its head.
  explicit Hdf5File(const std::string& path);
  ~Hdf5File();
  Hdf5File(const Hdf5File&) = delete;
  Hdf5File& operator=(const Hdf5File&) = delete;

  const std::string& path() const { return path_; }

  bool has(const std::string& name) const;

  // The members of a group, in the order of their names; no links into other files.
  std::vector<Hdf5Item> items(const std::string& group) const;

  // A data set of one dimension and its values, as they are, or turned into the type asked for
  // (integers beyond 2^53 become the nearest double).
  std::vector<double> numbers(const std::string& name) const;
  // Several at once, each value times its scale; those that Hdf5Writer wrote as floats, on all
  // cores.
  std::vector<std::vector<double>> numbers(const std::vector<Hdf5Scaled>& wanted) const;
  std::vector<std::uint8_t> bytes(const std::string& name) const;
  // One text, or a list of them. Bytes are given as they stand.
  std::string text(const std::string& name) const;
  std::vector<std::string> texts(const std::string& name) const;

  // Attributes of an object: of a text, of a number; nothing where there is none such.
  std::optional<std::string> text_attribute(const std::string& name, const char* attribute) const;
  std::optional<double> number_attribute(const std::string& name, const char* attribute) const;

private:
  struct Open;
  std::string path_;
  std::unique_ptr<Open> open_;
};

}  // namespace clickwise::io
