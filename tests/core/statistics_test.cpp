#include "clickwise/core/statistics.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>
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

TEST_CASE("quantiles of many values are those of the sorted values", "[core]") {
  std::mt19937 chance(5);
  std::lognormal_distribution<double> skewed(0.0, 2.0);
  std::vector<double> values;
  const auto check = [&] {
    std::vector<double> sorted = values;
    std::ranges::sort(sorted);
    for (const double p : {0.0, 1e-4, 0.05, 0.3, 0.5, 0.95, 0.99995, 1.0}) {
      const double place = p * static_cast<double>(sorted.size() - 1);
      const auto below = static_cast<std::size_t>(place);
      const double low = sorted[below];
      const double high = sorted[std::min(below + 1, sorted.size() - 1)];
      const double expected = low + (place - std::floor(place)) * (high - low);
      CAPTURE(p, values.size());
      CHECK(core::quantile_of(values, p) == expected);
      CHECK(core::quantile(values, p) == expected);
    }
  };
  SECTION("spread over decades") {
    for (int i = 0; i < 20000; ++i) values.push_back(skewed(chance));
    check();
  }
  SECTION("two far apart") {
    values.assign(5000, -3.0);
    values.insert(values.end(), 4999, 1e9);
    check();
  }
  SECTION("small at every place that a sample might look at") {
    for (int i = 0; i < 20000; ++i) values.push_back(i % 64 == 0 ? -1.0 - i : skewed(chance));
    check();
  }
  SECTION("all the same") {
    values.assign(10000, 0.125);
    check();
  }
  SECTION("one that is infinite") {
    for (int i = 0; i < 20000; ++i) values.push_back(skewed(chance));
    values.push_back(std::numeric_limits<double>::infinity());
    std::vector<double> sorted = values;
    std::ranges::sort(sorted);
    CHECK(core::quantile(values, 0.5) == sorted[10000]);
  }
}
