// The checksum of a single text, which HDF5 itself has none for.
#pragma once

#include <zlib.h>

#include <string_view>

namespace clickwise::io {

inline constexpr const char* text_checksum_name = "crc32";

// CRC-32 of ISO 3309, as zlib and Python's zlib.crc32 give it.
inline double text_checksum(std::string_view text) {
  return static_cast<double>(
      ::crc32(0, reinterpret_cast<const Bytef*>(text.data()), static_cast<uInt>(text.size())));
}

}  // namespace clickwise::io
