// The data sets of an HDF5 group, as channels.
#pragma once

#include "channel_table.hpp"

namespace clickwise::logs {

// The data sets of one dimension and of numbers. As many rows as `reference` has, or where none is
// given as most of them have; `leave_out`: others are left out with a note, else reading one is a
// core::InputError that tells both lengths.
ChannelTable hdf5_table(const std::string& path, const std::string& group,
                        const std::optional<bike::ColumnRef>& reference, bool leave_out);

// The group with the most channels of one length, for a file that nobody has told about. Throws
// core::InputError where there is none.
std::string likeliest_group(const std::string& path);

}  // namespace clickwise::logs
