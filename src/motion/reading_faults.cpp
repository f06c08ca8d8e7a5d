#include "clickwise/motion/reading_faults.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <cstring>
#include <stdexcept>

#include "clickwise/motion/calibration.hpp"
#include "fault_search.hpp"

namespace clickwise::motion {

std::size_t FaultSearch::samples(double seconds, std::size_t least) const {
  return std::max(least, static_cast<std::size_t>(std::llround(seconds / interval_s())));
}

std::vector<run::Stretch> FaultSearch::usable_runs() const {
  std::vector<run::Stretch> runs;
  const auto behind_run = [this](std::size_t begin, std::size_t end) {
    const void* const hole = std::memchr(usable.data() + begin, 0, end - begin);
    return hole == nullptr
               ? end
               : static_cast<std::size_t>(static_cast<const std::uint8_t*>(hole) - usable.data());
  };
  for (const run::Stretch& stretch : recording.stretches) {
    for (std::size_t i = stretch.begin; i < stretch.end; ++i) {
      if (usable[i] == 0) continue;
      const std::size_t begin = i;
      i = behind_run(begin, stretch.end);
      runs.push_back({begin, i});
    }
  }
  return runs;
}

void mask(FaultSearch& search, run::Stretch stretch, Masked& masked) {
  ++masked.count;
  for (std::size_t i = stretch.begin; i < stretch.end; ++i) {
    masked.samples += search.usable[i];
    search.usable[i] = 0;
  }
}

ReadingFaults find_reading_faults(const run::Recording& recording, std::size_t channel,
                                  const SensorRange& range, const ReadingFaultOptions& options) {
  const run::Channel& readings = recording.channels.at(channel);
  if (!(range.stroke_m > 0.0) || !(recording.interval_s > 0.0))
    throw std::invalid_argument(fmt::format("stroke_m = {}, interval_s = {}; must be positive",
                                            range.stroke_m, recording.interval_s));
  FaultSearch search{
      recording, channel, range, options, to_travel(readings.readings, range.travel_m), {}};
  search.usable.resize(search.travel_m.size());
  std::ranges::transform(search.travel_m, search.usable.begin(), [](double travel) {
    return static_cast<std::uint8_t>(std::isfinite(travel));
  });
  ReadingFaults found;
  const auto book = [&](run::FaultKind kind, const Masked& masked) {
    found.faults.add(kind, readings.name, masked.count,
                     static_cast<double>(masked.samples) * recording.interval_s);
  };
  book(run::FaultKind::saturated, mask_saturated(search));
  book(run::FaultKind::stuck, mask_stuck(search));
  book(run::FaultKind::missing, mask_open_input(search));
  book(run::FaultKind::spike, mask_spikes(search));
  found.usable = std::move(search.usable);
  found.travel_m = std::move(search.travel_m);
  return found;
}

}  // namespace clickwise::motion
