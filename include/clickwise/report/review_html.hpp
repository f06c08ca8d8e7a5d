// A review as one self-contained HTML page: opens from disk, needs no network and no script.
#pragma once

#include <string>

#include "clickwise/workflow/review.hpp"

namespace clickwise::report {

// Every text from logs and bike files is escaped.
std::string review_html(const workflow::Review& review);

}  // namespace clickwise::report
