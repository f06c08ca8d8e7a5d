// The steps that readings come in.
#pragma once

#include <vector>

namespace clickwise::logs {

// The largest g for which all values are a + k g with whole k, where the values are decimals of at
// most 9 places; 0 where there is none or all values are equal. Values are finite. O(n).
double decimal_grid(const std::vector<double>& values);

}  // namespace clickwise::logs
