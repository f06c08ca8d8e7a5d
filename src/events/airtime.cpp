#include "clickwise/events/airtime.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <stdexcept>

namespace clickwise::events {

namespace {

void check(const std::vector<AirtimeEnd>& ends) {
  if (ends.empty()) throw std::invalid_argument("ends = 0; must be one or two");
  const run::TimeBase& time = ends.front().motion->time;
  for (const AirtimeEnd& end : ends)
    if (end.motion->travel_m.size() != end.counted.size() || end.counted.size() != time.samples ||
        end.motion->time.rate_hz != time.rate_hz || end.motion->time.start_s != time.start_s)
      throw std::invalid_argument(
          fmt::format("ends = {} with different time bases; must share one", ends.size()));
}

}  // namespace

std::vector<run::Airtime> airtimes(const std::vector<AirtimeEnd>& ends,
                                   const AirtimeOptions& options) {
  check(ends);
  const run::TimeBase& time = ends.front().motion->time;
  const auto extended = [&](std::size_t i) {
    return std::ranges::all_of(ends, [&](const AirtimeEnd& end) {
      return end.counted[i] != 0 && end.motion->travel_m[i] <= options.within_m;
    });
  };
  std::vector<run::Airtime> found;
  for (std::size_t i = 0; i < time.samples; ++i) {
    if (!extended(i)) continue;
    const std::size_t begin = i;
    while (i < time.samples && extended(i)) ++i;
    const double length_s = static_cast<double>(i - begin) * time.interval_s();
    if (length_s >= options.shortest_s && length_s <= options.longest_s)
      found.push_back({time.at(begin), time.at(i)});
  }
  return found;
}

}  // namespace clickwise::events
