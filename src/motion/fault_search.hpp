// The searches behind find_reading_faults(), one a kind. Private to motion.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/motion/reading_faults.hpp"

namespace clickwise::motion {

// What every search looks at, and the mask it clears.
struct FaultSearch {
  const run::Recording& recording;
  std::size_t channel;
  const SensorRange& range;
  const ReadingFaultOptions& options;
  std::vector<double> travel_m;  // of each reading; NaN where missing
  std::vector<std::uint8_t> usable;

  std::span<const double> readings() const { return recording.channels[channel].readings; }
  double interval_s() const { return recording.interval_s; }

  // Samples in a time, at least `least`.
  std::size_t samples(double seconds, std::size_t least) const;

  // Unbroken runs of usable samples, none across a hole in the clock.
  std::vector<run::Stretch> usable_runs() const;
};

// What a search masked.
struct Masked {
  long long count = 0;
  long long samples = 0;
};

// Clears [begin, end) of the mask; counts only what was usable.
void mask(FaultSearch& search, run::Stretch stretch, Masked& masked);

Masked mask_open_input(FaultSearch& search);
Masked mask_saturated(FaultSearch& search);
Masked mask_stuck(FaultSearch& search);
Masked mask_spikes(FaultSearch& search);

}  // namespace clickwise::motion
