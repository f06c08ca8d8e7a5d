#include "clickwise/core/polyline.hpp"

#include <catch2/catch.hpp>
#include <limits>
#include <stdexcept>

using clickwise::core::Polyline;

TEST_CASE("a polyline is straight between its points and straight on beyond them", "[core]") {
  const Polyline line({0.0, 1.0, 3.0}, {0.0, 2.0, 3.0});
  CHECK(line(0.5) == 1.0);
  CHECK(line(2.0) == 2.5);
  CHECK(line(-1.0) == -2.0);
  CHECK(line(5.0) == 4.0);
  CHECK(std::isnan(line(std::numeric_limits<double>::quiet_NaN())));
}

TEST_CASE("a polyline's slope is that of the right-hand piece at a point", "[core]") {
  const Polyline line({0.0, 1.0, 3.0}, {0.0, 2.0, 3.0});
  CHECK(line.slope(0.5) == 2.0);
  CHECK(line.slope(1.0) == 0.5);
  CHECK(line.slope(9.0) == 0.5);
}

TEST_CASE("a polyline's integral is that of its trapezoids", "[core]") {
  const Polyline line({0.0, 1.0, 3.0}, {0.0, 2.0, 3.0});
  CHECK(line.integral(1.0) == 1.0);
  CHECK(line.integral(3.0) == 6.0);
  CHECK(Polyline::constant(2.0).integral(3.0) == 6.0);
}

TEST_CASE("points out of order are refused", "[core]") {
  CHECK_THROWS_AS(Polyline({0.0, 0.0}, {1.0, 2.0}), std::invalid_argument);
  CHECK_THROWS_AS(Polyline({}, {}), std::invalid_argument);
}
