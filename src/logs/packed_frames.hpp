// Frames of packed binary fields, as channels.
#pragma once

#include "channel_table.hpp"

namespace clickwise::logs {

// `time`, where there is such a field, proves the frame: where its steps are not even, the frame
// is not what the bike file tells, and a core::InputError says so, with the frame that would fit
// where there is one. A frame cut in half at the end of the file is left out as truncated.
ChannelTable packed_table(const std::string& path, const bike::PackedFrames& packed,
                          const std::optional<bike::TimeColumn>& time);

}  // namespace clickwise::logs
