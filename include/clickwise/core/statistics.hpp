// Summary statistics that the whole program shares.
#pragma once

#include <cstddef>
#include <span>
#include <vector>

namespace clickwise::core {

// The p-quantile (0 <= p <= 1) of the values, straight between order statistics (the default of R
// and NumPy, type 7 of Hyndman and Fan, The American Statistician 50:361-365, 1996). NaN when
// empty. Values must not be NaN. O(n).
double quantile(std::vector<double> values, double p);

// The same of values that stay where they are.
double quantile_of(std::span<const double> values, double p);

double median(std::vector<double> values);

// The same of values that were counted into bins in rising order: only those of the bins that hold
// the quantile need be looked at again. Make one, gather the values of bins [first, last], ask.
class BinnedQuantile {
public:
  // counts: whole numbers, how many values each bin holds; at least one in all.
  BinnedQuantile(std::span<const double> counts, double p);

  std::size_t first() const { return first_; }
  std::size_t last() const { return last_; }
  void add(double value) { gathered_.push_back(value); }

  // Once every value of those bins is there.
  double value();

private:
  std::size_t first_ = 0;
  std::size_t last_ = 0;
  std::size_t rank_ = 0;  // among the gathered
  double part_ = 0.0;     // of the way to the next
  std::vector<double> gathered_;
};

// Two-pass mean and sample standard deviation (n - 1), with the rounding term of the second pass
// taken out (Chan, Golub and LeVeque, The American Statistician 37:242-247, 1983, eq. 1.7). NaN
// mean when empty, NaN standard deviation below two values.
struct MeanAndDeviation {
  double mean;
  double deviation;
};
MeanAndDeviation mean_and_deviation(const std::vector<double>& values);

// sum d_i d_(i+1) / sum d_i^2 about the mean, NIST StRD's definition. NaN below two values.
double lag_one_correlation(const std::vector<double>& values);

}  // namespace clickwise::core
