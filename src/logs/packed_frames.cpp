#include "packed_frames.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/core/errors.hpp"
#include "clickwise/io/mapped_file.hpp"
#include "packed_field.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t frames_looked_at = 2000;
constexpr double sure_share = 0.9;    // of even steps: this is the frame
constexpr double usable_share = 0.5;  // below it this is not
constexpr std::size_t longest_guess = 256;
constexpr double shortest_step_s = 2e-5;  // what a log of suspension has
constexpr double longest_step_s = 0.1;

using bike::PackedFrames;

std::string_view endian_word(bool big) {
  return big ? "big" : "little";
}

std::vector<std::size_t> offsets_of(const PackedFrames& packed) {
  std::vector<std::size_t> offsets;
  std::size_t at = packed.header_bytes;
  for (const bike::PackedField& field : packed.frame) {
    offsets.push_back(at);
    at += bike::size_of(field.type);
  }
  return offsets;
}

// The frame under which the time runs evenly, if only its length, its header or its byte order is
// told wrongly.
std::string better_frame(std::string_view file, const FieldPlace& told, const PackedFrames& packed,
                         double seconds_per_unit) {
  const auto fits = [&](const FieldPlace& place) {
    const Steps steps = steps_of(file, place, frames_looked_at);
    const double step_s = steps.usual * seconds_per_unit;
    return steps.even_share >= sure_share && step_s > shortest_step_s && step_s < longest_step_s;
  };
  FieldPlace swapped = told;
  swapped.big_endian = !told.big_endian;
  if (fits(swapped))
    return fmt::format("with endian = \"{}\" it would run evenly", endian_word(swapped.big_endian));
  for (std::size_t bytes = bike::size_of(told.type); bytes <= longest_guess; ++bytes) {
    FieldPlace longer = told;
    longer.frame_bytes = bytes;
    if (bytes != told.frame_bytes && fits(longer))
      return fmt::format("with frames of {} bytes in place of {} it would run evenly", bytes,
                         told.frame_bytes);
  }
  const std::size_t in_frame = told.first_byte - packed.header_bytes;
  for (std::size_t header = 0; header <= longest_guess; ++header) {
    FieldPlace moved = told;
    moved.first_byte = header + in_frame;
    if (fits(moved)) return fmt::format("with header_bytes = {} it would run evenly", header);
  }
  return "";
}

void check_time(std::string_view file, const FieldPlace& place, const PackedFrames& packed,
                double seconds_per_unit, const std::string& name, const std::string& path) {
  const double share = steps_of(file, place, frames_looked_at).even_share;
  if (share >= usable_share) return;
  const std::string better = better_frame(file, place, packed, seconds_per_unit);
  throw core::InputError(
      {path},
      fmt::format("by the frame in the bike file ({} bytes, {}-endian, behind {} bytes of header) "
                  "the time \"{}\" jumps about in {:.0f} % of its steps",
                  place.frame_bytes, endian_word(place.big_endian), packed.header_bytes, name,
                  100.0 * (1.0 - share)),
      "check the fields, endian and header_bytes of [log] packed" +
          (better.empty() ? better : "; " + better));
}

}  // namespace

ChannelTable packed_table(const std::string& path, const PackedFrames& packed,
                          const std::optional<bike::TimeColumn>& time) {
  auto file = std::make_shared<const io::MappedFile>(path);
  const std::size_t bytes = file->text().size();
  const std::size_t frame_bytes = packed.frame_bytes();
  if (bytes < packed.header_bytes + frame_bytes)
    throw core::InputError(
        {path},
        fmt::format("the file has {} bytes, less than its header ({}) and one frame ({})", bytes,
                    packed.header_bytes, frame_bytes),
        "check that the log is whole, and [log] packed in the bike file");
  ChannelTable table;
  table.path = path;
  table.written = fmt::format("packed frames of {} bytes, {}-endian", frame_bytes,
                              endian_word(packed.big_endian));
  for (const bike::PackedField& field : packed.frame) table.names.push_back(field.name);
  table.units.resize(table.names.size());
  table.rows = (bytes - packed.header_bytes) / frame_bytes;
  const std::size_t rest = (bytes - packed.header_bytes) % frame_bytes;
  table.truncated = rest > 0;
  std::vector<FieldPlace> places;
  for (std::size_t k = 0; const std::size_t offset : offsets_of(packed))
    places.push_back({offset, frame_bytes, packed.frame[k++].type, packed.big_endian});
  if (time) {
    const std::size_t index = find_channel(table, time->column);
    if (table.rows >= 3)
      check_time(file->text(), places[index], packed, time->seconds_per_unit, table.names[index],
                 path);
  } else if (rest > 0) {
    table.notes.push_back(fmt::format(
        "the file ends with {} of the {} bytes of a frame; without a time field nothing proves the "
        "frame: check it if the readings look odd",
        rest, frame_bytes));
  }
  table.read = [file, places, rows = table.rows](std::size_t channel) {
    return field_values(file->text(), places[channel], rows);
  };
  return table;
}

}  // namespace clickwise::logs
