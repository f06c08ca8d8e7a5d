// Weights over values: seconds over shaft speed, for example.
#pragma once

#include <vector>

namespace clickwise::core {

// Cell i holds weight[i] at about at[i], the weighted mean of what fell into it. at is increasing.
struct Density {
  std::vector<double> at;
  std::vector<double> weight;
};

}  // namespace clickwise::core
