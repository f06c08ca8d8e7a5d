#include "clickwise/sim/apparent.hpp"

#include <catch2/catch.hpp>

#include "apparent_rides.hpp"

using namespace clickwise;
using namespace clickwise::apparent_rides;
using Catch::Matchers::Contains;

namespace {

constexpr double ride_s = 90.0;

double steady(double) {
  return 1.0;
}

// A ride, its log and its parts.
struct Case {
  replay_rides::Ride course;
  Logged logged;

  sim::ApparentDamper found() const {
    return sim::apparent_damper(known(course.parts), logged.view());
  }
};

Case ride_case(int number, const std::function<double(double)>& scale = steady,
               const Accelerometer& accelerometer = {}, double seconds = ride_s) {
  const auto course = replay_rides::ride_number(number, 11, seconds);
  return {course, logged(ride(course, scale), course.parts.end.stroke_m, 5, accelerometer)};
}

double true_force(const damper::Curve& curve, std::size_t direction, double speed_m_s) {
  return (direction == 0 ? curve.compression : curve.rebound).force_n(speed_m_s);
}

const std::vector<sim::ApparentPoint>& points(const sim::ApparentDamper& damper,
                                              std::size_t direction) {
  return direction == 0 ? damper.compression : damper.rebound;
}

bool holds(const sim::Bounded& bounds, double truth) {
  return bounds.low <= truth && truth <= bounds.high;
}

}  // namespace

// 90 % bounds over about 200 points, neighbours of one ride erring alike (some 50 independent
// ones): three deviations of a share of 0.9 are 0.13. The bounds' own size: 2 N and 1.2 % of the
// force, times 1.645, at the least.
TEST_CASE("the curve and the friction come back from the ride alone", "[sim][slow]") {
  int inside = 0, all = 0, friction_inside = 0;
  double squares = 0.0;
  constexpr int rides = 12;
  for (int number = 0; number < rides; ++number) {
    const Case one = ride_case(number);
    CAPTURE(one.course.name);
    const auto found = one.found();
    REQUIRE(found.problem.empty());
    REQUIRE(found.compression.size() >= 3);
    const auto curve = one.course.parts.vehicle().curve;
    for (const std::size_t d : {0u, 1u})
      for (const auto& point : points(found, d)) {
        const double truth = true_force(curve, d, point.speed_m_s);
        ++all;
        inside += holds(point.force_n, truth);
        squares += std::pow((point.force_n.value - truth) / (50.0 + truth), 2);
        CHECK(*point.bike_file_n == truth);
      }
    friction_inside += holds(found.friction_n, one.course.parts.end.friction_n);
    // Twice the half width of a 90 % interval is 3.3 deviations.
    CHECK(std::abs(found.friction_n.value - one.course.parts.end.friction_n) <
          2.0 * (found.friction_n.high - found.friction_n.value));
    CHECK(found.lag_s == 0.0);
  }
  CHECK(all > 150);
  CHECK(inside > 0.77 * all);
  CHECK(std::sqrt(squares / all) < 0.05);
  // Of 12, at 0.9: fewer than 8 has a chance of 0.4 %.
  CHECK(friction_inside >= 8);
}

TEST_CASE("no point of the curve lies beyond the speeds that were ridden", "[sim]") {
  const Case one = ride_case(0, steady, {}, 40.0);
  const auto found = one.found();
  for (const std::size_t d : {0u, 1u}) {
    double fastest = 0.0;
    for (const double v : one.logged.log.velocity_m_s) fastest = std::max(fastest, d == 0 ? v : -v);
    REQUIRE(!points(found, d).empty());
    CHECK(points(found, d).back().speed_m_s < fastest);
    for (const auto& point : points(found, d)) CHECK(point.seconds >= 0.3);
  }
}

TEST_CASE("the curve does not hang on what the bike file says of the damper", "[sim]") {
  const Case one = ride_case(1, steady, {}, 40.0);
  const auto with = one.found();
  const auto without = sim::apparent_damper(known(one.course.parts, false), one.logged.view());
  REQUIRE(!with.compression.empty());
  REQUIRE(with.compression.size() == without.compression.size());
  for (std::size_t k = 0; k < with.compression.size(); ++k) {
    CHECK(with.compression[k].force_n.value == without.compression[k].force_n.value);
    CHECK(!without.compression[k].bike_file_n);
  }
  CHECK(!without.model_rms_m_s2);
  CHECK(*with.model_rms_m_s2 < 0.1 * with.felt_rms_m_s2);
}

// The load is what the mass makes of the reading: a mass 12 % too large makes all of it 12 % more.
// The ride tells the share within 1 %; the curve, scaled by the spring, stays.
TEST_CASE("a wrong mass shows against the spring and leaves the curve", "[sim]") {
  const Case one = ride_case(3, steady, {}, 60.0);
  auto heavy = known(one.course.parts);
  heavy.sprung_mass_kg *= 1.12;
  const auto right = one.found();
  const auto found = sim::apparent_damper(heavy, one.logged.view());
  REQUIRE(found.spring_share_told);
  CHECK(found.spring_share.value == Approx(1.12).epsilon(0.01));
  CHECK(found.spring_share.value / right.spring_share.value == Approx(1.12).epsilon(1e-6));
  for (std::size_t k = 0; k < right.compression.size(); ++k)
    CHECK(found.compression[k].force_n.value ==
          Approx(right.compression[k].force_n.value).epsilon(1e-6));
  // The model with the wrong mass misses by about 12 % of the whole load, g included.
  CHECK(*found.model_rms_m_s2 > 0.1 * gravity);
}

// 0.05 g of the sprung mass, at the shaft; an offset is told apart from friction by the direction.
TEST_CASE("a zero that is off goes into the offset, not into the friction", "[sim]") {
  const double bias = 0.05 * gravity;
  const auto right = ride_case(0, steady, {}, 60.0).found();
  const Case one = ride_case(0, steady, {.bias_m_s2 = bias}, 60.0);
  const auto found = one.found();
  const double expected = one.course.parts.sprung_kg * bias;
  CHECK(found.offset_n - right.offset_n == Approx(expected).epsilon(1e-6));
  CHECK(found.friction_n.value == Approx(right.friction_n.value).epsilon(1e-6));
  CHECK(found.mean_felt_m_s2 - right.mean_felt_m_s2 == Approx(bias).epsilon(1e-9));
}

TEST_CASE("an accelerometer that lags is laid back", "[sim]") {
  const Case one = ride_case(2, steady, {.late_samples = 4}, 60.0);
  const auto found = one.found();
  CHECK(found.lag_s == Approx(4e-3).margin(0.5e-3));
  const auto curve = one.course.parts.vehicle().curve;
  for (const auto& point : found.rebound)
    CHECK(point.force_n.value ==
          Approx(true_force(curve, 1, point.speed_m_s)).epsilon(0.05).margin(8.0));
}

TEST_CASE("a wrong axis, a wrong unit and a wrong place are named", "[sim]") {
  const Case one = ride_case(0, steady, {}, 40.0);
  const auto problem_at = [&](double factor) {
    Logged wrong = one.logged;
    for (double& felt : wrong.felt_m_s2) felt *= factor;
    const auto found = sim::apparent_damper(known(one.course.parts), wrong.view());
    CHECK(found.compression.empty());
    CHECK(!found.fade);
    return found.problem;
  };
  CHECK_THAT(problem_at(-1.0), Contains("points down") && Contains("up with the other sign"));
  CHECK_THAT(problem_at(gravity), Contains("logged in m/s2") && !Contains("sign"));
  CHECK_THAT(problem_at(-gravity), Contains("logged in m/s2") && Contains("other sign"));
  CHECK_THAT(problem_at(1.0 / gravity), Contains("unit = \"g\"") && !Contains("sign"));
  CHECK_THAT(problem_at(0.4), Contains("0.40 g"));
  Logged elsewhere = one.logged;
  std::rotate(elsewhere.felt_m_s2.begin(), elsewhere.felt_m_s2.begin() + 10000,
              elsewhere.felt_m_s2.end());
  CHECK_THAT(sim::apparent_damper(known(one.course.parts), elsewhere.view()).problem,
             Contains("does not follow the suspension"));
}

TEST_CASE("a ride that is too short, or without readings, says so", "[sim]") {
  const Case brief = ride_case(0, steady, {}, 12.0);
  CHECK_THAT(brief.found().problem, Contains("too little"));
  Logged none = brief.logged;
  std::fill(none.felt_m_s2.begin(), none.felt_m_s2.end(), NAN);
  CHECK_THAT(sim::apparent_damper(known(brief.course.parts), none.view()).problem,
             Contains("too few usable readings"));
  none.felt_m_s2.pop_back();
  CHECK_THROWS_AS(sim::apparent_damper(known(brief.course.parts), none.view()),
                  std::invalid_argument);
}
