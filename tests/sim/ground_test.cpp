#include "clickwise/sim/ground.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

using namespace clickwise::sim;

namespace {

WheelPath laid(Feature feature, double length_m = 30.0) {
  GroundPlan plan;
  plan.features.push_back(feature);
  return lay_ground(plan, length_m);
}

double highest(const WheelPath& path) {
  return *std::max_element(path.heights().begin(), path.heights().end());
}

}  // namespace

TEST_CASE("a smooth trail without features is level", "[sim]") {
  const WheelPath path = lay_ground({}, 10.0);
  for (const double h : path.heights()) REQUIRE(h == 0.0);
}

TEST_CASE("rocks, roots and hollows stand where they were put", "[sim]") {
  const auto rock = laid(Rock{10.0, 0.08, 0.4, false});
  CHECK(rock.height_m(10.2) == Approx(0.08).epsilon(1e-9));
  CHECK(rock.height_m(9.9) == 0.0);
  CHECK(rock.height_m(10.5) == 0.0);
  const auto slab = laid(Rock{10.0, 0.08, 0.4, true});
  CHECK(slab.height_m(10.15) == Approx(0.08));
  CHECK(slab.height_m(10.05) == Approx(0.04));
  const auto roots = laid(Roots{5.0, 0.05, 0.1, 0.6, 3});
  for (const double at : {5.05, 5.65, 6.25}) CHECK(roots.height_m(at) == Approx(0.05));
  CHECK(roots.height_m(6.85) == 0.0);
  const auto hollow = laid(Compression{10.0, 0.7, 8.0});
  CHECK(hollow.height_m(14.0) == Approx(-0.7));
  CHECK(hollow.height_m(18.5) == Approx(0.0).margin(1e-12));
}

TEST_CASE("a drop and a kicker lower the trail behind them for good", "[sim]") {
  const auto drop = laid(Drop{10.0, 0.6});
  CHECK(drop.height_m(9.99) == 0.0);
  CHECK(drop.height_m(10.2) == Approx(-0.6));
  CHECK(drop.height_m(29.0) == Approx(-0.6));
  const auto kicker = laid(Kicker{10.0, 0.5, 2.0, 0.3});
  CHECK(kicker.height_m(11.0) == Approx(0.125));
  CHECK(highest(kicker) == Approx(0.5).margin(0.01));
  CHECK(kicker.height_m(13.0) == Approx(-0.3));
}

TEST_CASE("the axle rides over a step on the wheel's circle", "[sim]") {
  const Rolling rolling{.wheel_radius_m = 0.36, .patch_m = 0.0};
  const auto axle = rolled(laid(Rock{10.0, 0.05, 4.0, true}), rolling);
  const double at = 9.9;  // a wheel meets a low step before its axle reaches it
  CHECK(axle.height_m(at) >= 0.0);
  const auto sharp = rolled(laid(Drop{10.0, 0.2}), rolling);
  const double u = 0.15;  // behind an edge the axle sinks along the circle about it
  const double sunk = std::sqrt(0.36 * 0.36 - u * u) - 0.36;
  CHECK(sharp.height_m(10.0 + u) == Approx(sunk).margin(0.003));
  CHECK(highest(rolled(laid(Rock{10.0, 0.08, 0.4, false}), {})) <= 0.08);
}

TEST_CASE("the rate of the ground is its slope times the speed", "[sim]") {
  const auto kicker = laid(Kicker{10.0, 0.5, 2.0, 0.0});
  CHECK(kicker.at(11.005, 8.0).rate_m_s == Approx(0.5 * 2.0 * 0.5025 / 2.0 * 8.0).epsilon(1e-3));
  CHECK(kicker.at(-100.0, 8.0).rate_m_s == 0.0);
  CHECK(kicker.at(1e6, 8.0).rate_m_s == 0.0);
}

TEST_CASE("another line keeps the roughness and the trail, and moves the rocks", "[sim]") {
  GroundPlan plan;
  plan.roughness_m3 = roughness_class('E').mean_m3;
  plan.features = {RockGarden{100.0, 50.0, 2.0, 0.1}};
  const auto base = lay_ground(plan, 400.0);
  plan.line = {.seed = 4, .change = 0.2};
  const auto other = lay_ground(plan, 400.0);
  double xy = 0.0;
  double xx = 0.0;
  double yy = 0.0;
  for (std::size_t i = 0; i < base.heights().size(); ++i) {
    xy += base.heights()[i] * other.heights()[i];
    xx += base.heights()[i] * base.heights()[i];
    yy += other.heights()[i] * other.heights()[i];
  }
  const double likeness = xy / std::sqrt(xx * yy);
  CHECK(likeness < 0.999);
  CHECK(likeness > 0.9);  // sqrt(1 - 0.2^2) = 0.98, less the longest waves' chance
}
