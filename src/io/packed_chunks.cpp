#include "packed_chunks.hpp"

#include <libdeflate.h>
#include <zlib.h>

#include <algorithm>
#include <array>
#include <bit>
#include <cstdint>
#include <memory>
#include <new>

namespace clickwise::io {

namespace {

constexpr std::size_t float_bytes = 4;
constexpr double worth_packing = 0.4;  // of a plane's bytes: what is left must be less
constexpr int deflate_level = 6;       // docs/decisions/archive.md
constexpr std::size_t largest_chunk_values = std::size_t{1} << 24U;

bool filters_are_ours(hid_t list) {
  constexpr std::array<H5Z_filter_t, 2> ours{H5Z_FILTER_SHUFFLE, H5Z_FILTER_DEFLATE};
  if (H5Pget_nfilters(list) != static_cast<int>(ours.size())) return false;
  for (unsigned i = 0; i < ours.size(); ++i) {
    unsigned flags = 0;
    std::size_t parameters = 0;
    if (H5Pget_filter2(list, i, &flags, &parameters, nullptr, 0, nullptr, nullptr) != ours[i])
      return false;
  }
  return true;
}

// Values per chunk; 0: another layout.
std::size_t chunk_length(hid_t data, hid_t wanted) {
  const Hdf5Handle list(H5Dget_create_plist(data), H5Pclose);
  const Hdf5Handle type(H5Dget_type(data), H5Tclose);
  hsize_t length = 0;
  if (!list || H5Pget_layout(list.id()) != H5D_CHUNKED || H5Tequal(type.id(), wanted) <= 0 ||
      !filters_are_ours(list.id()) || H5Pget_chunk(list.id(), 1, &length) != 1 ||
      length > largest_chunk_values)
    return 0;
  return static_cast<std::size_t>(length);
}

// Bytes sorted by place, the inverse of unshuffle().
std::string shuffle(std::span<const float> values, std::size_t plane) {
  std::string planes(plane * float_bytes, '\0');
  for (std::size_t i = 0; i < values.size(); ++i) {
    const auto bits = std::bit_cast<std::uint32_t>(values[i]);
    for (std::size_t byte = 0; byte < float_bytes; ++byte)
      planes[byte * plane + i] = static_cast<char>(bits >> (8U * byte) & 0xFFU);
  }
  return planes;
}

bool is_worth_packing(std::string_view plane) {
  uLongf size = compressBound(plane.size());
  std::vector<Bytef> packed(size);
  const int done = compress2(packed.data(), &size, reinterpret_cast<const Bytef*>(plane.data()),
                             plane.size(), 1);
  return done == Z_OK &&
         static_cast<double>(size) < worth_packing * static_cast<double>(plane.size());
}

// From bytes sorted by place: all first bytes, then all second ones, and so on.
void unshuffle(const std::uint8_t* planes, std::size_t plane, double scale, double* values,
               std::size_t count) {
  for (std::size_t i = 0; i < count; ++i) {
    const std::uint32_t bits = static_cast<std::uint32_t>(planes[i]) |
                               static_cast<std::uint32_t>(planes[plane + i]) << 8U |
                               static_cast<std::uint32_t>(planes[2 * plane + i]) << 16U |
                               static_cast<std::uint32_t>(planes[3 * plane + i]) << 24U;
    values[i] = static_cast<double>(std::bit_cast<float>(bits)) * scale;
  }
}

// One zlib stream of planes, one after the other.
std::string pack(std::string_view bytes, std::size_t planes) {
  const std::size_t length = bytes.size() / planes;
  z_stream stream{};
  std::string packed(compressBound(bytes.size()) + 64 * planes, '\0');
  if (deflateInit(&stream, deflate_level) != Z_OK) throw std::bad_alloc();
  stream.next_out = reinterpret_cast<Bytef*>(packed.data());
  stream.avail_out = static_cast<uInt>(packed.size());
  for (std::size_t i = 0; i < planes; ++i) {
    const std::string_view plane = bytes.substr(i * length, length);
    deflateParams(&stream, is_worth_packing(plane) ? deflate_level : Z_NO_COMPRESSION,
                  Z_DEFAULT_STRATEGY);
    stream.next_in = reinterpret_cast<Bytef*>(const_cast<char*>(plane.data()));
    stream.avail_in = static_cast<uInt>(plane.size());
    deflate(&stream, i + 1 == planes ? Z_FINISH : Z_BLOCK);
  }
  packed.resize(stream.total_out);
  deflateEnd(&stream);
  return packed;
}

// Unpacks chunk by chunk and gives each to `take(bytes, first value, count)`; false where one is
// damaged.
template <class Take>
bool unpack(const PackedChunks& chunks, const Take& take) {
  std::vector<std::uint8_t> bytes(chunks.chunk_values * chunks.value_bytes);
  const std::unique_ptr<libdeflate_decompressor, decltype(&libdeflate_free_decompressor)> inflater(
      libdeflate_alloc_decompressor(), libdeflate_free_decompressor);
  for (const PackedChunk& chunk : chunks.chunks) {
    std::size_t unpacked = 0;
    if (libdeflate_zlib_decompress(inflater.get(), chunk.packed.data(), chunk.packed.size(),
                                   bytes.data(), bytes.size(), &unpacked) != LIBDEFLATE_SUCCESS ||
        unpacked != bytes.size())
      return false;
    take(bytes, chunk.first, std::min(chunks.chunk_values, chunks.values - chunk.first));
  }
  return true;
}

}  // namespace

std::optional<PackedChunks> packed_chunks(hid_t data, hid_t type, std::string_view file) {
  const Hdf5Handle space(H5Dget_space(data), H5Sclose);
  if (!space || H5Sget_simple_extent_ndims(space.id()) != 1) return std::nullopt;
  PackedChunks chunks;
  chunks.values = static_cast<std::size_t>(H5Sget_simple_extent_npoints(space.id()));
  chunks.chunk_values = chunk_length(data, type);
  chunks.value_bytes = H5Tget_size(type);
  hsize_t count = 0;
  if (chunks.chunk_values == 0 || H5Dget_num_chunks(data, space.id(), &count) < 0 ||
      count != (chunks.values + chunks.chunk_values - 1) / chunks.chunk_values)
    return std::nullopt;
  for (hsize_t i = 0; i < count; ++i) {
    hsize_t first = 0, size = 0;
    unsigned skipped = 0;
    haddr_t address = 0;
    if (H5Dget_chunk_info(data, space.id(), i, &first, &skipped, &address, &size) < 0 ||
        skipped != 0 || first != i * chunks.chunk_values || size > file.size() ||
        address > file.size() - size)
      return std::nullopt;
    chunks.chunks.push_back(
        {static_cast<std::size_t>(first), file.substr(address, static_cast<std::size_t>(size))});
  }
  return chunks;
}

std::string encode(std::span<const float> values, std::size_t chunk_values) {
  return pack(shuffle(values, chunk_values), float_bytes);
}

std::string encode(std::span<const std::uint8_t> values, std::size_t chunk_values) {
  std::string padded(chunk_values, '\0');
  std::copy(values.begin(), values.end(), padded.begin());
  return pack(padded, 1);
}

bool decode(const PackedChunks& chunks, double scale, std::vector<double>& values) {
  values.resize(chunks.values);
  return unpack(
      chunks, [&](const std::vector<std::uint8_t>& planes, std::size_t first, std::size_t count) {
        unshuffle(planes.data(), chunks.chunk_values, scale, values.data() + first, count);
      });
}

bool decode(const PackedChunks& chunks, std::vector<std::uint8_t>& values) {
  values.resize(chunks.values);
  return unpack(chunks,
                [&](const std::vector<std::uint8_t>& bytes, std::size_t first, std::size_t count) {
                  std::copy_n(bytes.data(), count, values.data() + first);
                });
}

}  // namespace clickwise::io
