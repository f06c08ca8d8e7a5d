// Compressed chunks of a data set, packed and unpacked without the HDF5 library, whose one thread
// would take several times as long to read them.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "hdf5_handle.hpp"

namespace clickwise::io {

struct PackedChunk {
  std::size_t first = 0;    // value
  std::string_view packed;  // in the mapped file
};

struct PackedChunks {
  std::size_t values = 0;
  std::size_t chunk_values = 0;
  std::size_t value_bytes = 1;
  std::vector<PackedChunk> chunks;  // all of them
};

// Where they lie in the file; nothing for a data set of any other make than Hdf5Writer's: one
// dimension, of this type, shuffle and deflate on every chunk.
std::optional<PackedChunks> packed_chunks(hid_t data, hid_t type, std::string_view file);

// The bytes of one chunk, as the library's shuffle and deflate filters read them: one zlib stream,
// in which a plane of bytes that hardly shrinks, as the last bits of noise do, is stored as it is,
// to be read at the speed of memory. zlib's checksum is at the end.
std::string encode(std::span<const float> values, std::size_t chunk_values);
std::string encode(std::span<const std::uint8_t> values, std::size_t chunk_values);

// Little-endian floats times `scale`, or bytes. False where a chunk is damaged. May run beside
// other calls.
bool decode(const PackedChunks& chunks, double scale, std::vector<double>& values);
bool decode(const PackedChunks& chunks, std::vector<std::uint8_t>& values);

}  // namespace clickwise::io
