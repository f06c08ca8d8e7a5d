// Work spread over the machine's cores.
#pragma once

#include <cstddef>
#include <functional>

namespace clickwise::core {

// Cores that work is spread over: the machine's, or what the environment variable
// CLICKWISE_THREADS says (1 or more). At least 1.
std::size_t worker_count();

// Calls job(0) ... job(count - 1), spread over up to worker_count() threads; returns when all are
// done. The first exception thrown by a job is rethrown here after the others have ended.
void parallel_for(std::size_t count, const std::function<void(std::size_t)>& job);

}  // namespace clickwise::core
