#include "clickwise/core/statistics.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

namespace core = clickwise::core;

namespace {

// NIST StRD univariate sets NumAcc2-4: a first value, then 500 pairs around it.
std::vector<double> numerical_accuracy_set(double first, double low, double high) {
  std::vector<double> values{first};
  for (int i = 0; i < 500; ++i) {
    values.push_back(low);
    values.push_back(high);
  }
  return values;
}

struct Certified {
  std::vector<double> values;
  double mean, deviation, lag_one;
  double relative_deviation_tolerance;
};

}  // namespace

// NIST Statistical Reference Datasets, univariate summary statistics, certified values
// (check-values 3.2e-g).
TEST_CASE("NIST's certified mean, deviation and lag-one correlation are met", "[core]") {
  const std::vector<Certified> sets{
      {{10000001, 10000003, 10000002}, 10000002, 1.0, -0.5, 1e-13},
      {numerical_accuracy_set(1.2, 1.1, 1.3), 1.2, 0.1, -0.999, 1e-13},
      {numerical_accuracy_set(1000000.2, 1000000.1, 1000000.3), 1000000.2, 0.1, -0.999, 1e-9},
      {numerical_accuracy_set(10000000.2, 10000000.1, 10000000.3), 10000000.2, 0.1, -0.999, 1e-7},
  };
  for (const Certified& set : sets) {
    CAPTURE(set.mean);
    const auto found = core::mean_and_deviation(set.values);
    CHECK(found.mean == Approx(set.mean).epsilon(1e-13));
    CHECK(found.deviation == Approx(set.deviation).epsilon(set.relative_deviation_tolerance));
    CHECK(core::lag_one_correlation(set.values) ==
          Approx(set.lag_one).epsilon(set.relative_deviation_tolerance));
  }
}

TEST_CASE("a quantile is straight between order statistics", "[core]") {
  CHECK(core::quantile({4.0, 1.0, 3.0, 2.0}, 0.5) == 2.5);
  CHECK(core::quantile({4.0, 1.0, 3.0, 2.0}, 0.0) == 1.0);
  CHECK(core::quantile({4.0, 1.0, 3.0, 2.0}, 1.0) == 4.0);
  CHECK(core::quantile({7.0}, 0.3) == 7.0);
  CHECK(std::isnan(core::quantile({}, 0.5)));
}
