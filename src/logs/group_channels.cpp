#include "group_channels.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <map>
#include <memory>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/utf8.hpp"
#include "clickwise/io/hdf5_file.hpp"

namespace clickwise::logs {

namespace {

constexpr int deepest = 8;
constexpr std::size_t most_groups = 1000;

std::string inside(const std::string& group, const std::string& name) {
  return group.ends_with('/') ? group + name : group + "/" + name;
}

bool is_channel(const io::Hdf5Item& item) {
  return item.kind == io::Hdf5Kind::numbers && item.shape.size() == 1;
}

std::string shape_words(const std::vector<std::size_t>& shape) {
  if (shape.empty()) return "1 value";
  std::string words;
  for (const std::size_t length : shape)
    words += (words.empty() ? "" : " x ") + fmt::format("{}", length);
  return words;
}

struct Listing {
  std::vector<std::string> lines;
  std::map<std::string, std::size_t> channels;  // of each group, those of its commonest length
};

// Of the lengths, the one that occurs most often; the longest of several such.
std::pair<std::size_t, std::size_t> commonest_length(const std::vector<io::Hdf5Item>& items) {
  std::map<std::size_t, std::size_t> counts;
  for (const io::Hdf5Item& item : items)
    if (is_channel(item)) ++counts[item.shape[0]];
  std::pair<std::size_t, std::size_t> best{0, 0};
  for (const auto& [length, count] : counts)
    if (count >= best.second) best = {length, count};
  return best;
}

void list(const io::Hdf5File& file, const std::string& group, int depth, Listing& listing) {
  if (depth > deepest || listing.channels.size() >= most_groups) return;
  const std::vector<io::Hdf5Item> items = file.items(group);
  listing.lines.push_back(fmt::format("{:<32} group", group));
  listing.channels[group] = commonest_length(items).second;
  for (const io::Hdf5Item& item : items)
    if (item.kind != io::Hdf5Kind::group)
      listing.lines.push_back(core::as_utf8(fmt::format(
          "{:<32} {:<8} {} {}", inside(group, item.name), item.type.empty() ? "other" : item.type,
          shape_words(item.shape), item.units)));
  for (const io::Hdf5Item& item : items)
    if (item.kind == io::Hdf5Kind::group) list(file, inside(group, item.name), depth + 1, listing);
}

Listing list_all(const io::Hdf5File& file) {
  Listing listing;
  list(file, "/", 0, listing);
  return listing;
}

std::string groups_with_channels(const io::Hdf5File& file) {
  std::string words;
  for (const auto& [group, count] : list_all(file).channels)
    if (count > 0) words += (words.empty() ? "" : ", ") + group;
  return words.empty() ? "no group of this file holds any" : "groups that hold some: " + words;
}

}  // namespace

std::string likeliest_group(const std::string& path) {
  const io::Hdf5File file(path);
  const Listing listing = list_all(file);
  const auto best =
      std::max_element(listing.channels.begin(), listing.channels.end(),
                       [](const auto& a, const auto& b) { return a.second < b.second; });
  if (best == listing.channels.end() || best->second == 0)
    throw core::InputError({path},
                           "this HDF5 file holds no data sets of one dimension and of numbers",
                           "give a file with a data set for each channel");
  return best->first;
}

ChannelTable hdf5_table(const std::string& path, const std::string& group,
                        const std::optional<bike::ColumnRef>& reference, bool leave_out) {
  auto file = std::make_shared<const io::Hdf5File>(path);
  if (!file->has(group))
    throw core::InputError({path}, "there is no group " + group,
                           "correct [log] hdf5 in the bike file; " + groups_with_channels(*file));
  std::vector<io::Hdf5Item> items = file->items(group);
  ChannelTable table;
  table.path = path;
  table.written = "HDF5, group " + group;
  table.contents = list_all(*file).lines;
  table.hdf5_group = group;
  table.rows = commonest_length(items).first;
  std::erase_if(items, [](const io::Hdf5Item& item) { return !is_channel(item); });
  if (items.empty())
    throw core::InputError(
        {path}, "the group " + group + " holds no data sets of one dimension and of numbers",
        "correct [log] hdf5 in the bike file; " + groups_with_channels(*file));
  const auto is_out = [&](const io::Hdf5Item& item) { return item.shape[0] != table.rows; };
  if (leave_out) {
    for (const io::Hdf5Item& item : items)
      if (is_out(item))
        table.notes.push_back(fmt::format("{} holds {} values where most hold {}; it is left out",
                                          item.name, item.shape[0], table.rows));
    std::erase_if(items, is_out);
  }
  for (const io::Hdf5Item& item : items) {
    table.names.push_back(core::as_utf8(item.name));
    table.units.push_back(core::as_utf8(item.units));
  }
  if (reference && !leave_out) table.rows = items[find_channel(table, *reference)].shape[0];
  table.read = [file, group, items, path, rows = table.rows](std::size_t channel) {
    const io::Hdf5Item& item = items[channel];
    if (item.shape[0] != rows)
      throw core::InputError(
          {path},
          fmt::format("the data set {} holds {} values, but the others hold {}",
                      inside(group, item.name), item.shape[0], rows),
          "one group must hold channels of one length: put those of another rate into a group of "
          "their own, or resample them");
    return file->numbers(inside(group, item.name));
  };
  return table;
}

}  // namespace clickwise::logs
