// A log that is no text: named channels of numbers, all of one length.
#pragma once

#include <cstddef>
#include <functional>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/logs/facts.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::logs {

struct ChannelTable {
  std::string path;
  std::string written;             // what it is: "packed frames of 10 bytes, little-endian"
  std::vector<std::string> names;  // of the channels
  std::vector<std::string> units;  // of each, empty where the file does not tell
  std::size_t rows = 0;
  bool truncated = false;
  std::vector<std::string> notes;
  std::string hdf5_group;  // as LogFacts, and
  std::vector<std::string> contents;
  std::function<std::vector<double>(std::size_t)> read;  // the values of a channel, `rows` of them
};

// Which channel the bike file means; throws core::InputError as find_column does.
std::size_t find_channel(const ChannelTable& table, const bike::ColumnRef& column);

run::Recording recording_of(const ChannelTable& table, const bike::LogFormat& format,
                            const std::vector<bike::ColumnRef>& columns);

// The time is guessed without a format.
LogFacts facts_of(const ChannelTable& table, const bike::LogFormat* format);

}  // namespace clickwise::logs
