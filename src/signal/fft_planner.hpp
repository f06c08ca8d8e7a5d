// FFTW's planner is not thread-safe; running a plan is.
#pragma once

#include <mutex>

namespace clickwise::signal {

inline std::mutex& fft_planner() {
  static std::mutex mutex;
  return mutex;
}

}  // namespace clickwise::signal
