#include "clickwise/io/hdf5_file.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "hdf5_handle.hpp"
#include "packed_chunks.hpp"
#include "text_checksum.hpp"

namespace clickwise::io {

namespace {

constexpr std::string_view signature("\x89HDF\r\n\x1a\n", 8);
constexpr std::size_t first_user_block = 512;
constexpr std::size_t most_values = std::size_t{400} << 20U;  // a week at 1 kHz is no more
constexpr std::size_t longest_text = std::size_t{64} << 20U;

std::string type_name(hid_t type) {
  const std::size_t bits = 8 * H5Tget_size(type);
  switch (H5Tget_class(type)) {
    case H5T_INTEGER:
      return fmt::format("{}int{}", H5Tget_sign(type) == H5T_SGN_NONE ? "u" : "", bits);
    case H5T_FLOAT:
      return fmt::format("float{}", bits);
    case H5T_STRING:
      return "text";
    case H5T_COMPOUND:
      return "compound";
    default:
      return "other";
  }
}

Hdf5Kind kind_of(hid_t type) {
  switch (H5Tget_class(type)) {
    case H5T_INTEGER:
    case H5T_FLOAT:
      return Hdf5Kind::numbers;
    case H5T_STRING:
      return Hdf5Kind::text;
    default:
      return Hdf5Kind::other;
  }
}

// The text in front of the padding.
std::string unpadded(const char* begin, std::size_t size, H5T_str_t padding) {
  std::string text(begin, size);
  if (padding == H5T_STR_SPACEPAD)
    text.erase(text.find_last_not_of(' ') + 1);
  else
    text.erase(std::min(text.find('\0'), text.size()));
  return text;
}

// Reads texts through `read(memory type, buffer)`, of a fixed length or of their own.
template <class Read>
std::optional<std::vector<std::string>> read_texts(hid_t type, hid_t space, const Read& read) {
  const auto count =
      static_cast<std::size_t>(std::max<hssize_t>(H5Sget_simple_extent_npoints(space), 0));
  const Hdf5Handle memory(H5Tcopy(type), H5Tclose);
  std::vector<std::string> texts(count);
  if (count == 0) return texts;
  if (H5Tis_variable_str(type) > 0) {
    std::vector<char*> pointers(count, nullptr);
    if (read(memory.id(), pointers.data()) < 0) return std::nullopt;
    for (std::size_t i = 0; i < count; ++i)
      if (pointers[i]) texts[i] = pointers[i];
    H5Dvlen_reclaim(memory.id(), space, H5P_DEFAULT, pointers.data());
    return texts;
  }
  const std::size_t size = H5Tget_size(type);
  if (size == 0 || size > longest_text || count > longest_text / size) return std::nullopt;
  std::vector<char> buffer(count * size);
  if (read(memory.id(), buffer.data()) < 0) return std::nullopt;
  for (std::size_t i = 0; i < count; ++i)
    texts[i] = unpadded(buffer.data() + i * size, size, H5Tget_strpad(type));
  return texts;
}

Hdf5Handle open_attribute(hid_t file, const std::string& name, const char* attribute) {
  if (H5Aexists_by_name(file, name.c_str(), attribute, H5P_DEFAULT) <= 0) return {};
  return {H5Aopen_by_name(file, name.c_str(), attribute, H5P_DEFAULT, H5P_DEFAULT), H5Aclose};
}

std::optional<std::string> attribute_text(hid_t file, const std::string& name,
                                          const char* attribute) {
  const Hdf5Handle open = open_attribute(file, name, attribute);
  if (!open) return std::nullopt;
  const Hdf5Handle type(H5Aget_type(open.id()), H5Tclose);
  const Hdf5Handle space(H5Aget_space(open.id()), H5Sclose);
  if (H5Tget_class(type.id()) != H5T_STRING) return std::nullopt;
  const auto texts = read_texts(type.id(), space.id(), [&](hid_t memory, void* buffer) {
    return H5Aread(open.id(), memory, buffer);
  });
  if (!texts || texts->size() != 1) return std::nullopt;
  return texts->front();
}

herr_t collect(hid_t, const char* name, const H5L_info_t* info, void* names) {
  if (info->type != H5L_TYPE_EXTERNAL)
    static_cast<std::vector<std::string>*>(names)->emplace_back(name);
  return 0;
}

}  // namespace

struct Hdf5File::Open {
  explicit Open(const std::string& name) : path(name), mapped(name) {}

  std::string path;
  MappedFile mapped;
  Hdf5Handle file;

  [[noreturn]] void refuse(const std::string& wrong, const std::string& remedy) const {
    throw core::InputError({path}, wrong, remedy);
  }

  [[noreturn]] void refuse_damaged(const std::string& name) const {
    refuse(name + " cannot be read: the file is damaged",
           "copy it from the logger or the backup again");
  }

  struct DataSet {
    Hdf5Handle data, type, space;
    std::size_t count = 0;
  };

  DataSet data_set(const std::string& name) const {
    if (!exists(name))
      refuse("there is no data set " + name, "clickwise inspect lists what the file holds");
    DataSet set;
    set.data = {H5Dopen2(file.id(), name.c_str(), H5P_DEFAULT), H5Dclose};
    if (!set.data) {
      const Hdf5Handle group(H5Gopen2(file.id(), name.c_str(), H5P_DEFAULT), H5Gclose);
      if (group)
        refuse(name + " is a group, not a data set",
               "name a data set; clickwise inspect lists them");
      refuse_damaged(name);
    }
    set.type = {H5Dget_type(set.data.id()), H5Tclose};
    set.space = {H5Dget_space(set.data.id()), H5Sclose};
    const hssize_t count = H5Sget_simple_extent_npoints(set.space.id());
    if (!set.type || count < 0) refuse_damaged(name);
    set.count = static_cast<std::size_t>(count);
    return set;
  }

  template <class Value>
  std::vector<Value> values(const std::string& name, hid_t memory) const {
    const Hdf5Lock lock;
    const DataSet set = data_set(name);
    if (kind_of(set.type.id()) != Hdf5Kind::numbers)
      refuse(fmt::format("the data set {} holds no numbers ({})", name, type_name(set.type.id())),
             "name a data set of integers or floating-point numbers");
    if (H5Sget_simple_extent_ndims(set.space.id()) != 1)
      refuse("the data set " + name + " has not one dimension",
             "store every channel as a data set of its own");
    if (set.count > most_values)
      refuse(fmt::format("the data set {} claims to hold {} values", name, set.count),
             "the file is damaged, or no log");
    std::vector<Value> values(set.count);
    if (set.count > 0 &&
        H5Dread(set.data.id(), memory, H5S_ALL, H5S_ALL, H5P_DEFAULT, values.data()) < 0)
      refuse_damaged(name);
    return values;
  }

  std::vector<std::string> texts(const std::string& name) const {
    const Hdf5Lock lock;
    const DataSet set = data_set(name);
    if (kind_of(set.type.id()) != Hdf5Kind::text)
      refuse("the data set " + name + " holds no text", "the file is no archive of this program");
    if (set.count > most_values) refuse_damaged(name);
    const auto texts = read_texts(set.type.id(), set.space.id(), [&](hid_t memory, void* buffer) {
      return H5Dread(set.data.id(), memory, H5S_ALL, H5S_ALL, H5P_DEFAULT, buffer);
    });
    if (!texts) refuse_damaged(name);
    return *texts;
  }

  // Every group on the way must be there, or the library calls the question an error.
  bool exists(const std::string& name) const {
    if (name == "/") return true;
    for (std::size_t at = name.find_first_not_of('/'); at != std::string::npos;) {
      at = name.find('/', at);
      if (H5Lexists(file.id(), name.substr(0, at).c_str(), H5P_DEFAULT) <= 0) return false;
      at = name.find_first_not_of('/', at);
    }
    return H5Oexists_by_name(file.id(), name.c_str(), H5P_DEFAULT) > 0;
  }

  Hdf5Item item(hid_t group, const std::string& name) const {
    Hdf5Item item{name, Hdf5Kind::other, {}, {}, {}};
    const Hdf5Handle object(H5Oopen(group, name.c_str(), H5P_DEFAULT), H5Oclose);
    const H5I_type_t what = object ? H5Iget_type(object.id()) : H5I_BADID;
    if (what == H5I_GROUP) item.kind = Hdf5Kind::group;
    if (what != H5I_DATASET) return item;
    const Hdf5Handle type(H5Dget_type(object.id()), H5Tclose);
    const Hdf5Handle space(H5Dget_space(object.id()), H5Sclose);
    item.kind = kind_of(type.id());
    item.type = type_name(type.id());
    std::vector<hsize_t> shape(
        static_cast<std::size_t>(std::max(H5Sget_simple_extent_ndims(space.id()), 0)));
    H5Sget_simple_extent_dims(space.id(), shape.data(), nullptr);
    item.shape.assign(shape.begin(), shape.end());
    item.units = attribute_text(object.id(), ".", "units").value_or("");
    return item;
  }
};

bool is_hdf5(std::string_view bytes) {
  if (bytes.starts_with(signature)) return true;
  for (std::size_t at = first_user_block; at < bytes.size(); at *= 2)
    if (bytes.substr(at).starts_with(signature)) return true;
  return false;
}

Hdf5File::Hdf5File(const std::string& path) : path_(path), open_(std::make_unique<Open>(path)) {
  if (!is_hdf5(open_->mapped.text()))
    open_->refuse("this is no HDF5 file",
                  "give the file that the logger or clickwise import wrote");
  const Hdf5Lock lock;
  const Hdf5Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose);
  H5Pset_file_locking(access.id(), false, true);  // read-only media cannot be locked
  open_->file = {H5Fopen(path.c_str(), H5F_ACC_RDONLY, access.id()), H5Fclose};
  if (!open_->file)
    open_->refuse("this HDF5 file is cut off or damaged",
                  "copy it from the logger or the backup again");
}

Hdf5File::~Hdf5File() {
  const Hdf5Lock lock;
  open_.reset();
}

bool Hdf5File::has(const std::string& name) const {
  const Hdf5Lock lock;
  return open_->exists(name);
}

std::vector<Hdf5Item> Hdf5File::items(const std::string& group) const {
  const Hdf5Lock lock;
  if (!open_->exists(group))
    open_->refuse("there is no group " + group, "clickwise inspect lists what the file holds");
  const Hdf5Handle open(H5Gopen2(open_->file.id(), group.c_str(), H5P_DEFAULT), H5Gclose);
  if (!open)
    open_->refuse(group + " is no group", "name the group that holds the channels' data sets");
  std::vector<std::string> names;
  hsize_t at = 0;
  if (H5Literate(open.id(), H5_INDEX_NAME, H5_ITER_INC, &at, collect, &names) < 0)
    open_->refuse_damaged(group);
  std::vector<Hdf5Item> items;
  for (const std::string& name : names) items.push_back(open_->item(open.id(), name));
  return items;
}

std::vector<double> Hdf5File::numbers(const std::string& name) const {
  return open_->values<double>(name, H5T_NATIVE_DOUBLE);
}

std::vector<std::vector<double>> Hdf5File::numbers(const std::vector<Hdf5Scaled>& wanted) const {
  std::vector<std::optional<PackedChunks>> chunks;
  for (const Hdf5Scaled& one : wanted) {
    const Hdf5Lock lock;
    chunks.push_back(
        packed_chunks(open_->data_set(one.name).data.id(), H5T_IEEE_F32LE, open_->mapped.text()));
  }
  std::vector<std::vector<double>> values(wanted.size());
  core::parallel_for(wanted.size(), [&](std::size_t i) {
    if (chunks[i]) {
      if (!decode(*chunks[i], wanted[i].scale, values[i])) open_->refuse_damaged(wanted[i].name);
      return;
    }
    values[i] = numbers(wanted[i].name);
    for (double& value : values[i]) value *= wanted[i].scale;
  });
  return values;
}

std::vector<std::uint8_t> Hdf5File::bytes(const std::string& name) const {
  const Hdf5Lock lock;
  const auto chunks =
      packed_chunks(open_->data_set(name).data.id(), H5T_STD_U8LE, open_->mapped.text());
  if (!chunks) return open_->values<std::uint8_t>(name, H5T_NATIVE_UINT8);
  std::vector<std::uint8_t> values;
  if (!decode(*chunks, values)) open_->refuse_damaged(name);
  return values;
}

std::vector<std::string> Hdf5File::texts(const std::string& name) const {
  return open_->texts(name);
}

std::string Hdf5File::text(const std::string& name) const {
  const std::vector<std::string> texts = open_->texts(name);
  if (texts.size() != 1)
    open_->refuse(fmt::format("{} holds {} texts in place of one", name, texts.size()),
                  "the file is no archive of this program");
  const auto checksum = number_attribute(name, text_checksum_name);
  if (checksum && *checksum != text_checksum(texts.front())) open_->refuse_damaged(name);
  return texts.front();
}

std::optional<std::string> Hdf5File::text_attribute(const std::string& name,
                                                    const char* attribute) const {
  const Hdf5Lock lock;
  if (!open_->exists(name)) return std::nullopt;
  return attribute_text(open_->file.id(), name, attribute);
}

std::optional<double> Hdf5File::number_attribute(const std::string& name,
                                                 const char* attribute) const {
  const Hdf5Lock lock;
  if (!open_->exists(name)) return std::nullopt;
  const Hdf5Handle open = open_attribute(open_->file.id(), name, attribute);
  if (!open) return std::nullopt;
  const Hdf5Handle type(H5Aget_type(open.id()), H5Tclose);
  const Hdf5Handle space(H5Aget_space(open.id()), H5Sclose);
  if (kind_of(type.id()) != Hdf5Kind::numbers || H5Sget_simple_extent_npoints(space.id()) != 1)
    return std::nullopt;
  double number = 0.0;
  if (H5Aread(open.id(), H5T_NATIVE_DOUBLE, &number) < 0) return std::nullopt;
  return number;
}

}  // namespace clickwise::io
