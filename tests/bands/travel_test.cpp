#include "clickwise/bands/travel.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <functional>
#include <numeric>
#include <stdexcept>
#include <vector>

namespace bands = clickwise::bands;

namespace {

using Mask = std::vector<std::uint8_t>;

double sum(const std::vector<double>& values) {
  return std::accumulate(values.begin(), values.end(), 0.0);
}

}  // namespace

TEST_CASE("ten travel samples give the figures of a hand count", "[bands]") {
  const std::vector<double> x{0.0, 0.0005, 0.001, 0.010, 0.020, 0.030, 0.040, 0.050, 0.0999, 0.08};
  const Mask counted{1, 1, 1, 1, 1, 1, 1, 1, 1, 0};
  const auto use = bands::travel_use(x, counted, 0.1, 0.1);
  CHECK(use.mean_m == Approx(0.2514 / 9).epsilon(1e-12));
  CHECK(use.p50_m == Approx(0.020).epsilon(1e-12));
  CHECK(use.p95_m == Approx(0.050 + 0.6 * 0.0499).epsilon(1e-12));  // place 0.95 * 8 = 7.6
  CHECK(use.max_m == 0.0999);
  REQUIRE(use.histogram.seconds.size() == 100);
  CHECK(use.histogram.edges_m.front() == 0.0);
  CHECK(use.histogram.edges_m.back() == Approx(0.1).epsilon(1e-12));
  CHECK(use.histogram.seconds[0] == Approx(0.2).epsilon(1e-12));
  CHECK(use.histogram.seconds[1] == Approx(0.1).epsilon(1e-12));
  CHECK(use.histogram.seconds[99] == Approx(0.1).epsilon(1e-12));
}

TEST_CASE("a short stroke is cut in hundredths", "[bands]") {
  const std::vector<double> x{0.01};
  CHECK(bands::travel_use(x, Mask{1}, 1.0, 0.055).histogram.seconds.size() == 100);
}

TEST_CASE("readings outside the stroke are kept, in bins that reach them", "[bands]") {
  const std::vector<double> x{-0.0023, 0.05, 0.1, 0.1034};
  const auto use = bands::travel_use(x, Mask(4, 1), 0.25, 0.1);
  CHECK(sum(use.histogram.seconds) == 1.0);
  CHECK(use.histogram.edges_m.front() == Approx(-0.003).epsilon(1e-12));
  CHECK(use.histogram.edges_m.back() == Approx(0.104).epsilon(1e-12));

  const std::vector<double> far{-1e9, 0.05, 1e12, std::nan("")};
  const auto wide = bands::travel_use(far, Mask(4, 1), 0.25, 0.1);
  CHECK(sum(wide.histogram.seconds) == 0.75);
  CHECK(wide.histogram.seconds.size() < 200);
  CHECK(wide.histogram.edges_m.front() == -1e9);
  CHECK(wide.histogram.edges_m.back() > 1e12);
  CHECK(std::ranges::adjacent_find(wide.histogram.edges_m, std::greater_equal{}) ==
        wide.histogram.edges_m.end());
}

TEST_CASE("nothing counted gives NaN figures and zero seconds", "[bands]") {
  const std::vector<double> x{0.05};
  const auto use = bands::travel_use(x, Mask{0}, 1.0, 0.1);
  CHECK(std::isnan(use.mean_m));
  CHECK(std::isnan(use.p95_m));
  CHECK(sum(use.histogram.seconds) == 0.0);
}

TEST_CASE("a stroke that is no length is refused", "[bands]") {
  const std::vector<double> x{0.05};
  for (const double stroke : {0.0, -0.1, HUGE_VAL, std::nan("")})
    CHECK_THROWS_AS(bands::travel_use(x, Mask{1}, 1.0, stroke), std::invalid_argument);
  CHECK_THROWS_AS(bands::travel_use(x, Mask{1, 1}, 1.0, 0.1), std::invalid_argument);
}
