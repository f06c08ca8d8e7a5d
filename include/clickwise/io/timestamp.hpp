// Dates and times of day as loggers write them.
#pragma once

#include <string_view>

namespace clickwise::io {

// Seconds from 1970-01-01T00:00:00Z, less `epoch_s`, of
//   YYYY-MM-DD, then 'T' or a blank, then hh:mm[:ss[.fff]] and optionally Z, +hh:mm or -hh:mm
//   DD/MM/YYYY or DD.MM.YYYY (MM/DD/YYYY where the second number is above 12) with such a time
//   hh:mm:ss[.fff] alone: seconds of the day, `epoch_s` not taken off
// A time without a zone is taken as UTC. The fraction may be set off by '.' or ','. The leap second
// 23:59:60 is counted as the second before it, so that days keep 86400 s. Blanks around are
// ignored. NaN where the text is none of these. `epoch_s` in whole seconds keeps the fraction
// exact. Sources: RFC 3339 section 5.6, ISO 8601.
double parse_timestamp(std::string_view text, double epoch_s = 0.0);

// Whether the text is a time of day without a date.
bool is_time_of_day(std::string_view text);

}  // namespace clickwise::io
