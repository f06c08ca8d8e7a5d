// Faults of one channel's readings, before anything is made of them. docs/method/motion.md, M4-M8.
#pragma once

#include <cstdint>
#include <vector>

#include "clickwise/core/polyline.hpp"
#include "clickwise/run/fault.hpp"
#include "clickwise/run/recording.hpp"

namespace clickwise::motion {

// What the readings of a channel can mean.
struct SensorRange {
  core::Polyline travel_m;  // over the reading
  double stroke_m = 0.0;    // > 0
};

// Limits of what a suspension does; common practice, no source.
struct ReadingFaultOptions {
  double stuck_s = 1.0;              // constant so long while another channel moves
  double stuck_noisy_s = 0.25;       // the same for a channel whose noise keeps it from resting
  double stuck_extended_s = 4.0;     // the same near full extension, where an end rests in the air
  double extended_m = 5e-3;          // "near full extension"
  double held_outside_share = 0.03;  // of the stroke: held flat so far outside it is no travel
  double flat_share = 1e-3;          // of the span of readings: what counts as flat
  double largest_acceleration_m_s2 = 1000.0;  // at the shaft
  double spike_window_s = 6e-3;               // on each side; at least 3 samples
  double longest_spike_s = 3e-3;              // at least 3 samples
  double spike_threshold = 3.5;               // Hampel sigmas
};

struct ReadingFaults {
  std::vector<std::uint8_t> usable;  // one per sample; 0: missing or masked by a fault
  std::vector<double> travel_m;      // of each sample, masked or not; NaN where missing
  run::FaultLedger faults;           // stuck, saturated, spike, missing (an open input's noise)
};

// Finds, in this order, each on what the ones before left:
//   saturated  held flat outside the stroke: three equal readings at a converter's end, or 20 ms
//              anywhere; an end held at its stroke by the ground is not;
//   stuck      one and the same reading while another channel of the log moves, for five times as
//              long as this channel's readings usually stay the same at most, between stuck_noisy_s
//              and stuck_s;
//   missing    an open input: in half a second more than a quarter of the second differences ask
//              for an impossible acceleration;
//   spike      a few samples off their neighbours by Hampel's rule and by more than the ride's
//              noise, quantisation and the largest acceleration explain, that return.
// Cells without a number are not usable either; the reader has counted them. The samples on both
// sides of a saturated or stuck stretch go with it. Seconds are masked samples times the
// recording's interval. O(samples x channels). Throws std::out_of_range for a channel that is not
// there, std::invalid_argument for a stroke or an interval that is not positive.
ReadingFaults find_reading_faults(const run::Recording& recording, std::size_t channel,
                                  const SensorRange& range,
                                  const ReadingFaultOptions& options = {});

}  // namespace clickwise::motion
