// Reading a log of whatever kind the bike file tells.
#pragma once

#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::logs {

// The clock and the wanted columns: fields of packed frames, data sets of an HDF5 group, or columns
// of text. Whatever the kind, stamps go through lay_clock() (logs/clock.hpp), and readings that are
// no finite number below 1e100 are NaN and counted as missing. Packed frames are read from the
// mapped file; a frame cut in half at the end is truncated. Throws core::InputError: what
// read_text_log refuses; a frame under which the time does not run evenly (and which would); an
// HDF5 file that is damaged, a group or data set that is not there, data sets of different length.
// core::JobError: what lay_clock refuses.
run::Recording read_log(const std::string& path, const bike::LogFormat& format,
                        const std::vector<bike::ColumnRef>& columns);

}  // namespace clickwise::logs
