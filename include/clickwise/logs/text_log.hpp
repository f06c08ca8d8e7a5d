// Reading a delimited text log.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::logs {

struct TextLogOptions {
  std::size_t chunk_bytes = 0;  // text that one job parses; 0: chosen. Changes no result
};

// The clock and the wanted columns of a log, channels in the order asked for, readings as written.
// What is told apart: logs/sniff.hpp; what the clock makes of the stamps: logs/clock.hpp; which
// last line is cut off: io/delimited.hpp. A log without a time column runs at format.rate_hz.
// Cells that are empty or no finite number below 1e100 are NaN and counted as missing; so are rows
// of a wrong number of cells (under no channel's name) and unreadable time stamps.
// Throws core::InputError (file, line): what sniff_text_log and find_column refuse, a wanted column
// of words, more rows malformed than whole; core::JobError: what lay_clock refuses.
// Memory: the file's size, mapped, and 8 bytes for each sample of each wanted column and the clock.
run::Recording read_text_log(const std::string& path, const bike::LogFormat& format,
                             const std::vector<bike::ColumnRef>& columns,
                             const TextLogOptions& options = {});

}  // namespace clickwise::logs
