// The compressed chunks of a data set of floats, packed and unpacked without the HDF5 library, whose
// one thread would take several times as long to read them.
#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "hdf5_handle.hpp"

namespace clickwise::io {

struct FloatChunk {
  std::size_t first = 0;    // value
  std::string_view packed;  // in the mapped file
};

struct FloatChunks {
  std::size_t values = 0;
  std::size_t chunk_values = 0;
  std::vector<FloatChunk> chunks;  // all of them
};

// Where they lie in the file; nothing for a data set of any other make than Hdf5Writer's floats:
// one dimension, little-endian 32-bit floats, shuffle and deflate on every chunk.
std::optional<FloatChunks> float_chunks(hid_t data, std::string_view file);

// The bytes of one chunk, as the library's shuffle and deflate filters read them: one zlib stream,
// in which a plane of bytes that does not shrink by a fifth, as the last bits of noise do not, is
// stored as it is, to be read at the speed of memory. zlib's checksum is at the end.
std::string encode(std::span<const float> values, std::size_t chunk_values);

// Times `scale`. False where a chunk is damaged. May run beside other calls.
bool decode(const FloatChunks& chunks, double scale, std::vector<double>& values);

}  // namespace clickwise::io
