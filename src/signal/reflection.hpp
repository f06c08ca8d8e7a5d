// Continuing a series beyond its ends.
#pragma once

#include <cstddef>
#include <span>

namespace clickwise::signal {

// Odd reflection at both ends, of as many turns as it takes: y(-i) = 2 first - y(i),
// y(n-1+i) = 2 last - y(n-1-i). `first` and `last` are the turning points: values that the series
// has at its ends but for noise.
class OddReflection {
public:
  // The turning points are straight-line fits to the `fit` samples (>= 1) at either end.
  // values must not be empty and must outlive this.
  OddReflection(std::span<const double> values, std::size_t fit);

  // The continued series at sample i, inside or outside.
  double at(std::ptrdiff_t i) const;

private:
  std::span<const double> values_;
  double first_;
  double last_;
};

}  // namespace clickwise::signal
