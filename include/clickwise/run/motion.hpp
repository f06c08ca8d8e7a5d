// The motion of one end on a uniform time base: what every figure of a review is taken from.
//
// Sign, stated once for the program: travel counts from full extension into compression; shaft
// velocity is positive in compression and negative in rebound.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

namespace clickwise::run {

// An exactly zero velocity counts as (low-speed) compression.
inline bool is_compression(double velocity_m_s) {
  return velocity_m_s >= 0.0;
}

enum class Source { potentiometer, imu_pair, archive };

// Sample i stands at start_s + i / rate_hz.
struct TimeBase {
  double start_s = 0.0;
  double rate_hz = 0.0;
  std::size_t samples = 0;

  double interval_s() const { return 1.0 / rate_hz; }
  double at(std::size_t i) const { return start_s + static_cast<double>(i) / rate_hz; }
};

// All series have time.samples values. Where valid is 0 the other values are not to be used: they
// may be NaN, or a bridge that the smoother needed.
struct Motion {
  TimeBase time;
  Source source = Source::potentiometer;
  std::vector<double> travel_m;
  std::vector<double> velocity_m_s;
  std::vector<double> velocity_sigma_m_s;  // one standard deviation of the velocity's error
  std::vector<std::uint8_t> valid;
  double velocity_noise_m_s = 0.0;  // rms error of the velocity while the end is at rest
  double reading_noise_m = 0.0;     // rms noise of a single travel reading
  double cutoff_hz = 0.0;           // of the smoother, median over the ride
  std::string smoothing;            // one sentence: what was used
  // Whether the travel is known well enough for figures of it; if not, why: a sentence. It then
  // only serves the ratio and the order of events.
  bool travel_known = true;
  std::string travel_withheld;
};

}  // namespace clickwise::run
