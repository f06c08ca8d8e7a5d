// One field of packed frames: where it stands, and its values.
#pragma once

#include <cstddef>
#include <string_view>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::logs {

struct FieldPlace {
  std::size_t first_byte = 0;   // of the first frame's field, from the start of the file
  std::size_t frame_bytes = 1;  // from frame to frame
  bike::FieldType type = bike::FieldType::u8;
  bool big_endian = false;
};

// Frames whose field lies wholly in the file, at most `most`.
std::vector<double> field_values(std::string_view file, const FieldPlace& place, std::size_t most);

struct Steps {
  double usual = 0.0;       // median of the steps from value to value
  double even_share = 0.0;  // of them, those within a factor of 3 of it; 0: it is not positive
};

// Overflows of an unsigned counter, by steps of less than 1/64 of it, are undone.
Steps steps_of(std::string_view file, const FieldPlace& place, std::size_t most);

}  // namespace clickwise::logs
