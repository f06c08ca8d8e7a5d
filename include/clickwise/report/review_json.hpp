// A review as JSON, schema "clickwise-review-1" (docs/formats/review.md).
#pragma once

#include <string>

#include "clickwise/workflow/review.hpp"

namespace clickwise::report {

std::string review_json(const workflow::Review& review);

}  // namespace clickwise::report
