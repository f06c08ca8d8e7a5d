// JSON values from results, and their text: what this program writes is what RFC 8259 allows.
#pragma once

#include <boost/json.hpp>
#include <string>
#include <vector>

namespace clickwise::report {

// A number, or null where it is not finite (RFC 8259 section 6 has neither NaN nor infinity).
boost::json::value number(double value);

// number(scale * value) of each.
boost::json::array numbers(const std::vector<double>& values, double scale = 1.0);

// Indented text, shortest round-trip numbers, arrays of plain values on one line; ends in a
// newline.
std::string to_text(const boost::json::value& value);

}  // namespace clickwise::report
