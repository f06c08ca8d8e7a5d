#include "clickwise/core/parallel.hpp"

#include <algorithm>
#include <atomic>
#include <cstdlib>
#include <exception>
#include <mutex>
#include <thread>
#include <vector>

namespace clickwise::core {

std::size_t worker_count() {
  if (const char* text = std::getenv("CLICKWISE_THREADS")) {
    const long asked = std::strtol(text, nullptr, 10);
    if (asked >= 1) return static_cast<std::size_t>(std::min(asked, 1024L));
  }
  return std::max<std::size_t>(1, std::thread::hardware_concurrency());
}

void parallel_for(std::size_t count, const std::function<void(std::size_t)>& job) {
  std::atomic<std::size_t> next{0};
  std::mutex mutex;
  std::exception_ptr first_error;
  const auto work = [&] {
    for (std::size_t i = next++; i < count; i = next++) {
      try {
        job(i);
      } catch (...) {
        const std::lock_guard lock(mutex);
        if (!first_error) first_error = std::current_exception();
        next = count;
      }
    }
  };
  {
    std::vector<std::jthread> helpers;
    const std::size_t workers = std::min(worker_count(), count);
    for (std::size_t i = 1; i < workers; ++i) helpers.emplace_back(work);
    work();
  }
  if (first_error) std::rethrow_exception(first_error);
}

}  // namespace clickwise::core
