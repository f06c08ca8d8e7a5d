#include "clickwise/logs/log.hpp"

#include "clickwise/core/errors.hpp"
#include "clickwise/io/hdf5_file.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "clickwise/logs/facts.hpp"
#include "clickwise/logs/text_log.hpp"
#include "group_channels.hpp"
#include "packed_frames.hpp"

namespace clickwise::logs {

namespace {

std::optional<bike::ColumnRef> reference_of(const bike::LogFormat& format,
                                            const std::vector<bike::ColumnRef>& columns) {
  if (format.time) return format.time->column;
  return columns.empty() ? std::nullopt : std::optional(columns.front());
}

void refuse_hdf5_as_text(const std::string& path) {
  if (!io::is_hdf5(io::MappedFile(path).text())) return;
  throw core::InputError({path}, "this is an HDF5 file, and the bike file does not say so",
                         "add hdf5 = { group = \"" + likeliest_group(path) +
                             "\" } to [log] in the bike file, with its data sets for columns");
}

}  // namespace

run::Recording read_log(const std::string& path, const bike::LogFormat& format,
                        const std::vector<bike::ColumnRef>& columns) {
  if (format.packed)
    return recording_of(packed_table(path, *format.packed, format.time), format, columns);
  if (format.hdf5_group)
    return recording_of(hdf5_table(path, *format.hdf5_group, reference_of(format, columns), false),
                        format, columns);
  refuse_hdf5_as_text(path);
  return read_text_log(path, format, columns);
}

LogFacts inspect_log(const std::string& path, const bike::LogFormat* format) {
  if (format && format->packed)
    return facts_of(packed_table(path, *format->packed, format->time), format);
  if (format && format->hdf5_group)
    return facts_of(hdf5_table(path, *format->hdf5_group, std::nullopt, true), format);
  if (!format && io::is_hdf5(io::MappedFile(path).text()))
    return facts_of(hdf5_table(path, likeliest_group(path), std::nullopt, true), nullptr);
  if (format) refuse_hdf5_as_text(path);
  return inspect_text_log(path, format);
}

}  // namespace clickwise::logs
