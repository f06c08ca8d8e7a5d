// A dyno fit in words and as JSON.
#pragma once

#include <boost/json.hpp>
#include <string>

#include "clickwise/damper/dyno_fit.hpp"

namespace clickwise::report {

// Parameters with their standard errors, residuals, misfits by line, and what is not known.
std::string dyno_fit_text(const damper::DynoFit& fit);

boost::json::object dyno_fit_json(const damper::DynoFit& fit);

}  // namespace clickwise::report
