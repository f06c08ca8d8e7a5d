#include "clickwise/damper/reach.hpp"

#include <catch2/catch.hpp>

#include "clickwise/bike/bike_file.hpp"
#include "support/bike_text.hpp"

using namespace clickwise;
using bike::Adjuster;
using damper::Damper;
using damper::reach;
using damper::RideDensity;

namespace {

Damper front() {
  const bike::Bike b = bike::parse_bike(test::larch_text, "larch.toml");
  return Damper::from(*b.front, {}, b.front->damper_place);
}

const RideDensity ride{{{0.1, 0.7, 1.5}, {20.0, 3.0, 0.5}}, {{0.2, 0.9}, {25.0, 4.0}}};

}  // namespace

TEST_CASE("reach is the work that one click moves, by hand on three cells", "[damper]") {
  const Damper d = front();
  const auto now = d.curve().compression;
  const auto then = d.curve_with(Adjuster::high_speed_compression, 5).compression;
  const auto work = [](const damper::Law& law, double v, double s) {
    return law.force_n(v) * v * s;
  };
  const auto r = reach(d, Adjuster::high_speed_compression, ride, 0.7);
  // The cell at the split counts as low speed.
  const double low =
      work(then, 0.1, 20.0) - work(now, 0.1, 20.0) + work(then, 0.7, 3.0) - work(now, 0.7, 3.0);
  const double high = work(then, 1.5, 0.5) - work(now, 1.5, 0.5);
  CHECK(r.low_j == Approx(low).epsilon(1e-12));
  CHECK(r.high_j == Approx(high).epsilon(1e-12));
  CHECK(r.high_share == Approx(high / work(now, 1.5, 0.5)).epsilon(1e-12));
}

TEST_CASE("twice the time is twice the joules and the same share", "[damper]") {
  RideDensity twice = ride;
  for (double& seconds : twice.rebound.weight) seconds *= 2.0;
  const auto once = reach(front(), Adjuster::low_speed_rebound, ride, 0.5);
  const auto both = reach(front(), Adjuster::low_speed_rebound, twice, 0.5);
  CHECK(both.low_j == Approx(2.0 * once.low_j).epsilon(1e-13));
  CHECK(both.low_share == Approx(once.low_share).epsilon(1e-13));
}

TEST_CASE("each adjuster reaches its own direction only", "[damper]") {
  RideDensity only_compression = ride;
  only_compression.rebound = {};
  const auto r = reach(front(), Adjuster::low_speed_rebound, only_compression, 0.5);
  CHECK(r.low_j == 0.0);
  CHECK(r.low_share == 0.0);
}

TEST_CASE("a closed adjuster is taken one click softer", "[damper]") {
  const Damper closed = front().with(Adjuster::low_speed_compression, 0);
  const auto r = reach(closed, Adjuster::low_speed_compression, ride, 0.7);
  const double v = 1.5;
  const double change =
      closed.curve().compression.force_n(v) -
      closed.curve_with(Adjuster::low_speed_compression, 1).compression.force_n(v);
  CHECK(change > 0.0);
  CHECK(r.high_j == Approx(change * v * 0.5).epsilon(1e-12));
}

TEST_CASE("an adjuster that the damper lacks reaches nothing", "[damper]") {
  const auto r = reach(front(), Adjuster::high_speed_rebound, ride, 0.7);
  CHECK(r.low_j + r.high_j == 0.0);
}
