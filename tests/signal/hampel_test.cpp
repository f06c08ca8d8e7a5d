#include "clickwise/signal/hampel.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>
#include <vector>

namespace signal = clickwise::signal;

namespace {

double plain_median(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  const std::size_t n = values.size();
  return n % 2 == 1 ? values[n / 2] : 0.5 * (values[n / 2 - 1] + values[n / 2]);
}

// The definition, word for word.
std::vector<std::size_t> plain_hampel(const std::vector<double>& y,
                                      const signal::HampelOptions& options) {
  std::vector<std::size_t> spikes;
  const auto half = static_cast<std::ptrdiff_t>(options.half_width);
  for (std::ptrdiff_t i = 0; i < std::ssize(y); ++i) {
    const std::vector<double> window(y.begin() + std::max<std::ptrdiff_t>(0, i - half),
                                     y.begin() + std::min(std::ssize(y), i + half + 1));
    const double median = plain_median(window);
    std::vector<double> off;
    for (const double value : window) off.push_back(std::abs(value - median));
    const double scale = std::max(signal::mad_to_sigma * plain_median(off), options.least_scale);
    const auto at = static_cast<std::size_t>(i);
    if (std::abs(y[at] - median) > options.threshold * scale) spikes.push_back(at);
  }
  return spikes;
}

}  // namespace

TEST_CASE("the scale factor is 1 over the upper quartile of the normal law", "[signal]") {
  // Phi(q) = 3/4 (check-values 2.4g)
  const double q = 1.0 / signal::mad_to_sigma;
  CHECK(0.5 * std::erfc(-q / std::sqrt(2.0)) == Approx(0.75).margin(1e-14).epsilon(0.0));
}

// Equal to the GNU Scientific Library's gsl_filter_impulse with MAD (check-values 2.4h).
TEST_CASE("one spike is found, and the median stands in for it", "[signal]") {
  const std::vector<double> y{10.1, 10.0, 10.3, 9.9, 25.0, 10.2, 10.0, 9.8, 10.1, 10.2};
  const std::vector<std::size_t> spikes = signal::hampel_spikes(y);
  CHECK(std::count(spikes.begin(), spikes.end(), 4u) == 1);
  CHECK(signal::window_medians(y, {4}, 3)[0] == Approx(10.0).margin(1e-9));
  // S = 0.2965204437, so that a threshold of 15 / S parts flagged from not flagged.
  const double limit = 15.0 / 0.2965204437;
  const auto flagged = [&](double threshold) {
    const auto found = signal::hampel_spikes(y, {.half_width = 3, .threshold = threshold});
    return std::count(found.begin(), found.end(), 4u) == 1;
  };
  CHECK(flagged(limit * (1.0 - 1e-9)));
  CHECK_FALSE(flagged(limit * (1.0 + 1e-9)));
}

TEST_CASE("a scale of zero neither divides nor flags everything", "[signal]") {
  const std::vector<double> y{1, 2, 1, 2, 50, 2, 1, 2, 1};  // check-values 2.4i
  CHECK(signal::hampel_spikes(y) == std::vector<std::size_t>{4});
  CHECK(signal::hampel_spikes(std::vector<double>(20, 3.0)).empty());
  SECTION("a count of quantisation at rest is no spike when the least scale says so") {
    std::vector<double> rest(21, 5.0);
    rest[10] = 6.0;
    CHECK(signal::hampel_spikes(rest) == std::vector<std::size_t>{10});
    CHECK(signal::hampel_spikes(rest, {.least_scale = 1.0}).empty());
  }
}

TEST_CASE("the moving window agrees with the definition", "[signal]") {
  std::mt19937_64 random(11);
  std::normal_distribution<double> normal;
  for (const std::size_t n : {0u, 1u, 2u, 3u, 7u, 8u, 400u}) {
    std::vector<double> y(n);
    for (double& value : y) value = std::round(2.0 * normal(random) * normal(random));
    for (const std::size_t half : {1u, 3u, 10u}) {
      for (const double least : {0.0, 0.4}) {
        const signal::HampelOptions options{.half_width = half, .least_scale = least};
        CHECK(signal::hampel_spikes(y, options) == plain_hampel(y, options));
      }
    }
  }
}

TEST_CASE("NaN and options without meaning are refused", "[signal]") {
  const std::vector<double> broken{1.0, std::numeric_limits<double>::quiet_NaN()};
  const std::vector<double> y{1.0, 2.0};
  CHECK_THROWS_AS(signal::hampel_spikes(broken), std::invalid_argument);
  CHECK_THROWS_AS(signal::hampel_spikes(y, {.half_width = 0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::hampel_spikes(y, {.threshold = -1.0}), std::invalid_argument);
}
