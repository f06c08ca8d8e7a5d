// The noise of one channel's readings, read off the top of its spectrum.
#pragma once

#include <span>
#include <vector>

namespace clickwise::signal {

struct ReadingNoise {
  double riding_m = 0.0;   // rms, white; 0 when there are too few readings to tell
  double resting_m = 0.0;  // the same where nothing moves: less, if quantisation hides it
};

ReadingNoise reading_noise(const std::vector<std::span<const double>>& stretches_m, double rate_hz);

}  // namespace clickwise::signal
