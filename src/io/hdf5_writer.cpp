#include "clickwise/io/hdf5_writer.hpp"

#include <hdf5_hl.h>

#include <algorithm>
#include <cstdlib>
#include <cstring>
#include <stdexcept>

#include "hdf5_handle.hpp"
#include "packed_chunks.hpp"
#include "text_checksum.hpp"

namespace clickwise::io {

namespace {

constexpr std::size_t chunk_values = std::size_t{1} << 16U;
constexpr std::size_t growth_bytes = std::size_t{4} << 20U;
constexpr unsigned deflate_level = 6;

void need(bool done, const char* what) {
  if (!done) throw std::runtime_error(std::string("the HDF5 library failed to ") + what);
}

// Catches the bytes of a file in memory when the library closes it: its own images of open files
// carry a superblock whose checksum does not match (1.10.8), and a library that fails to write to a
// full disk crashes when the program ends.
struct Image {
  std::string bytes;
  std::size_t size = 0;

  H5FD_file_image_callbacks_t callbacks() {
    return {[](std::size_t wanted, H5FD_file_image_op_t, void* image) {
              static_cast<Image*>(image)->size = wanted;
              return std::malloc(wanted);
            },
            [](void* to, const void* from, std::size_t count, H5FD_file_image_op_t, void*) {
              return std::memcpy(to, from, count);
            },
            [](void* old, std::size_t wanted, H5FD_file_image_op_t, void* image) {
              static_cast<Image*>(image)->size = wanted;
              return std::realloc(old, wanted);
            },
            [](void* data, H5FD_file_image_op_t when, void* image) {
              Image& caught = *static_cast<Image*>(image);
              if (when == H5FD_FILE_IMAGE_OP_FILE_CLOSE)
                caught.bytes.assign(static_cast<const char*>(data), caught.size);
              std::free(data);
              return herr_t{0};
            },
            [](void* image) { return image; },
            [](void*) { return herr_t{0}; },
            this};
  }
};

Hdf5Handle text_type(std::size_t size) {
  Hdf5Handle type(H5Tcopy(H5T_C_S1), H5Tclose);
  H5Tset_size(type.id(), std::max<std::size_t>(size, 1));
  H5Tset_cset(type.id(), H5T_CSET_UTF8);
  H5Tset_strpad(type.id(), H5T_STR_NULLPAD);
  return type;
}

// Chunks, shuffle and deflate, and the library's own checksum where a chunk may stay unpacked;
// plain for an empty list.
Hdf5Handle creation(std::size_t count, bool checksum = true) {
  Hdf5Handle list(H5Pcreate(H5P_DATASET_CREATE), H5Pclose);
  H5Pset_obj_track_times(list.id(), false);
  if (count == 0) return list;
  const hsize_t chunk = std::min(count, chunk_values);
  H5Pset_chunk(list.id(), 1, &chunk);
  H5Pset_shuffle(list.id());
  H5Pset_deflate(list.id(), deflate_level);
  if (checksum) H5Pset_fletcher32(list.id());
  return list;
}

}  // namespace

struct Hdf5Writer::Open {
  Image image;
  Hdf5Handle file;

  void attribute(const std::string& name, const char* attribute, hid_t type, const void* value) {
    const Hdf5Handle space(H5Screate(H5S_SCALAR), H5Sclose);
    const Hdf5Handle made(H5Acreate_by_name(file.id(), name.c_str(), attribute, type, space.id(),
                                            H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT),
                          H5Aclose);
    need(made && H5Awrite(made.id(), type, value) >= 0, "write an attribute");
  }

  void attribute(const std::string& name, const char* attribute_name, std::string_view text) {
    const std::string padded(text.empty() ? std::string_view("\0", 1) : text);
    attribute(name, attribute_name, text_type(text.size()).id(), padded.data());
  }

  void data(const std::string& name, hid_t stored, hid_t memory, const void* values,
            std::size_t count, std::string_view units) {
    const Hdf5Lock lock;
    const hsize_t length = count;
    const Hdf5Handle space(H5Screate_simple(1, &length, nullptr), H5Sclose);
    write(name, stored, memory, space.id(), creation(count).id(), count > 0 ? values : nullptr);
    attribute(name, "units", units);
  }

  template <class Value>
  void packed(const std::string& name, hid_t type, std::span<const Value> values,
              std::string_view units) {
    const Hdf5Lock lock;
    const hsize_t length = values.size();
    const Hdf5Handle space(H5Screate_simple(1, &length, nullptr), H5Sclose);
    const Hdf5Handle list = creation(values.size(), false);
    const Hdf5Handle set = make(name, type, space.id(), list.id());
    const std::size_t chunk = std::min(values.size(), chunk_values);
    for (std::size_t first = 0; first < values.size(); first += chunk) {
      const hsize_t offset = first;
      const std::string bytes =
          encode(values.subspan(first, std::min(chunk, values.size() - first)), chunk);
      need(H5Dwrite_chunk(set.id(), H5P_DEFAULT, 0, &offset, bytes.size(), bytes.data()) >= 0,
           "write a data set");
    }
    attribute(name, "units", units);
  }

  Hdf5Handle make(const std::string& name, hid_t stored, hid_t space, hid_t list) {
    Hdf5Handle set(
        H5Dcreate2(file.id(), name.c_str(), stored, space, H5P_DEFAULT, list, H5P_DEFAULT),
        H5Dclose);
    need(static_cast<bool>(set), "make a data set");
    return set;
  }

  void write(const std::string& name, hid_t stored, hid_t memory, hid_t space, hid_t list,
             const void* values) {
    const Hdf5Handle set = make(name, stored, space, list);
    if (values)
      need(H5Dwrite(set.id(), memory, H5S_ALL, H5S_ALL, H5P_DEFAULT, values) >= 0,
           "write a data set");
  }
};

Hdf5Writer::Hdf5Writer() : open_(std::make_unique<Open>()) {
  const Hdf5Lock lock;
  const Hdf5Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose);
  H5FD_file_image_callbacks_t callbacks = open_->image.callbacks();
  // 1.8 is the first format whose headers carry checksums.
  need(H5Pset_fapl_core(access.id(), growth_bytes, false) >= 0 &&
           H5Pset_file_image_callbacks(access.id(), &callbacks) >= 0 &&
           H5Pset_libver_bounds(access.id(), H5F_LIBVER_V18, H5F_LIBVER_V18) >= 0,
       "set up a file in memory");
  open_->file = {H5Fcreate("clickwise", H5F_ACC_TRUNC, H5P_DEFAULT, access.id()), H5Fclose};
  need(static_cast<bool>(open_->file), "make a file in memory");
}

Hdf5Writer::~Hdf5Writer() {
  const Hdf5Lock lock;
  open_.reset();
}

void Hdf5Writer::group(const std::string& name) {
  const Hdf5Lock lock;
  const Hdf5Handle made(
      H5Gcreate2(open_->file.id(), name.c_str(), H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT), H5Gclose);
  need(static_cast<bool>(made), "make a group");
}

void Hdf5Writer::data(const std::string& name, std::span<const double> values,
                      std::string_view units) {
  open_->data(name, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, values.data(), values.size(), units);
}

void Hdf5Writer::data(const std::string& name, std::span<const float> values,
                      std::string_view units) {
  open_->packed(name, H5T_IEEE_F32LE, values, units);
}

void Hdf5Writer::data(const std::string& name, std::span<const std::uint8_t> values,
                      std::string_view units) {
  open_->packed(name, H5T_STD_U8LE, values, units);
}

void Hdf5Writer::data(const std::string& name, std::span<const std::int64_t> values,
                      std::string_view units) {
  open_->data(name, H5T_STD_I64LE, H5T_NATIVE_INT64, values.data(), values.size(), units);
}

void Hdf5Writer::text(const std::string& name, std::string_view text, std::string_view units) {
  const Hdf5Lock lock;
  const std::string padded(text.empty() ? std::string_view("\0", 1) : text);
  const Hdf5Handle type = text_type(padded.size());
  const Hdf5Handle space(H5Screate(H5S_SCALAR), H5Sclose);
  open_->write(name, type.id(), type.id(), space.id(), creation(0).id(), padded.data());
  open_->attribute(name, "units", units);
  attribute(name, text_checksum_name, text_checksum(text));
}

void Hdf5Writer::texts(const std::string& name, const std::vector<std::string>& texts,
                       std::string_view units) {
  const Hdf5Lock lock;
  std::size_t longest = 1;
  for (const std::string& text : texts) longest = std::max(longest, text.size());
  std::string padded(texts.size() * longest, '\0');
  for (std::size_t i = 0; i < texts.size(); ++i)
    std::memcpy(padded.data() + i * longest, texts[i].data(), texts[i].size());
  const Hdf5Handle type = text_type(longest);
  open_->data(name, type.id(), type.id(), padded.data(), texts.size(), units);
}

void Hdf5Writer::attribute(const std::string& name, const char* attribute, std::string_view text) {
  const Hdf5Lock lock;
  open_->attribute(name, attribute, text);
}

void Hdf5Writer::attribute(const std::string& name, const char* attribute, double number) {
  const Hdf5Lock lock;
  open_->attribute(name, attribute, H5T_NATIVE_DOUBLE, &number);
}

void Hdf5Writer::axis(const std::string& name, const std::vector<std::string>& of) {
  const Hdf5Lock lock;
  const Hdf5Handle scale(H5Dopen2(open_->file.id(), name.c_str(), H5P_DEFAULT), H5Dclose);
  const std::string label = name.substr(name.rfind('/') + 1);
  need(scale && H5DSset_scale(scale.id(), label.c_str()) >= 0, "make an axis");
  for (const std::string& data : of) {
    const Hdf5Handle set(H5Dopen2(open_->file.id(), data.c_str(), H5P_DEFAULT), H5Dclose);
    need(set && H5DSattach_scale(set.id(), scale.id(), 0) >= 0, "attach an axis");
  }
}

std::string Hdf5Writer::finish() {
  const Hdf5Lock lock;
  need(H5Fflush(open_->file.id(), H5F_SCOPE_GLOBAL) >= 0, "flush");
  const ssize_t size = H5Fget_file_image(open_->file.id(), nullptr, 0);
  need(size > 0 && open_->file.close(), "end the file");
  std::string bytes = std::move(open_->image.bytes);
  need(bytes.size() >= static_cast<std::size_t>(size), "give all its bytes");
  bytes.resize(static_cast<std::size_t>(size));
  return bytes;
}

}  // namespace clickwise::io
