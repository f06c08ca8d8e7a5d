// The damper as ridden, as JSON: `apparent_damper` of an end.
#pragma once

#include <boost/json.hpp>

#include "clickwise/sim/apparent.hpp"

namespace clickwise::report {

boost::json::object apparent_json(const sim::ApparentDamper& damper);

}  // namespace clickwise::report
