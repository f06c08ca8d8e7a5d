#include "clickwise/damper/law.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "support/random_damper.hpp"

using clickwise::damper::Curve;
using clickwise::damper::Law;
using clickwise::test::RandomDampers;

namespace {

constexpr double infinite = std::numeric_limits<double>::infinity();
const Law example{
    .bleed_m_s = 0.101, .opening_n = 380.0, .slope_n_s_m = 180.0, .port_n_s2_m2 = 22.0};

// What bleed and valve pass at F_p: equation (1) as the contract writes it.
double flow(const Law& law, double F_p) {
  const double valve = law.has_valve() ? std::max(0.0, F_p - law.opening_n) / law.slope_n_s_m : 0.0;
  return law.bleed_m_s * std::sqrt(F_p / 100.0) + valve;
}

}  // namespace

TEST_CASE("the bleed alone passes B at 100 N", "[damper]") {
  const Law bleed{.bleed_m_s = 0.101};
  CHECK(bleed.force_n(0.101) == Approx(100.0).epsilon(1e-14));
  CHECK(bleed.force_n(0.202) == Approx(400.0).epsilon(1e-14));
  CHECK(bleed.knee_m_s() == infinite);
}

TEST_CASE("below, at and above the knee the force satisfies the law", "[damper]") {
  const double knee = example.knee_m_s();
  CHECK(knee == Approx(0.101 * std::sqrt(3.8)).epsilon(1e-14));
  CHECK(example.force_n(knee) == Approx(380.0 + 22.0 * knee * knee).epsilon(1e-13));
  for (const double v : {0.3 * knee, knee, 1.7 * knee, 1.0, 3.0, 10.0}) {
    const double F_p = example.force_n(v) - 22.0 * v * v;
    CHECK(flow(example, F_p) == Approx(v).epsilon(1e-12));
  }
}

TEST_CASE("random laws satisfy the contract's equation at every speed", "[damper]") {
  RandomDampers dampers(1);
  for (int i = 0; i < 2000; ++i) {
    const Law law = dampers.law();
    const double v = dampers.log_between(1e-4, 5.0);
    const double F = law.force_n(v);
    const double F_p = std::max(0.0, F - law.port_n_s2_m2 * v * v);
    // Root, square, port and subtraction are some eight roundings of 1.1e-16 of F.
    const double uncertain = flow(law, F_p + 1e-15 * F) - flow(law, F_p);
    CHECK(flow(law, F_p) == Approx(v).epsilon(1e-12).margin(uncertain));
  }
}

TEST_CASE("speed of force and force of speed undo each other", "[damper]") {
  RandomDampers dampers(2);
  for (int i = 0; i < 5000; ++i) {
    const Law law = dampers.law();
    const double v = dampers.log_between(1e-5, 20.0);
    const double F = law.force_n(v);
    // Where dF/dv is small beside F / v, F's last digit is worth more of v.
    const double rounding = 4e-16 * F / law.slope_at(v);
    CHECK(law.speed_m_s(F) == Approx(v).epsilon(1e-11).margin(4.0 * rounding));
    CHECK(law.force_n(law.speed_m_s(F)) == Approx(F).epsilon(1e-11));
  }
}

TEST_CASE("force rises with speed, and speed with force", "[damper]") {
  RandomDampers dampers(3);
  for (int i = 0; i < 300; ++i) {
    const Law law = dampers.law();
    double before = -1.0;
    double speed_before = -1.0;
    for (double v = 1e-4; v < 10.0; v *= 1.3) {
      CHECK(law.force_n(v) > before);
      before = law.force_n(v);
      CHECK(law.speed_m_s(before) > speed_before);
      speed_before = law.speed_m_s(before);
    }
  }
}

TEST_CASE("the slope is that of differences on both sides of the knee", "[damper]") {
  RandomDampers dampers(4);
  for (int i = 0; i < 1000; ++i) {
    const Law law = dampers.law();
    const double knee = law.knee_m_s();
    for (const double v : {0.5 * knee, 0.99 * knee, 1.01 * knee, 3.0 * knee, knee + 1.0}) {
      const double h = 1e-5 * v;
      if (v == 0.0) continue;
      const double difference = (law.force_n(v + h) - law.force_n(v - h)) / (2.0 * h);
      // Rounding of the difference F eps / h = F 1e-11 / v; curvature below 1e-8.
      CHECK(law.slope_at(v) == Approx(difference).epsilon(1e-7).margin(1e-10 * law.force_n(v) / v));
    }
  }
}

TEST_CASE("at the knee the slope is that of the side above", "[damper]") {
  const double knee = example.knee_m_s();
  const double h = 1e-7;
  const double above = (example.force_n(knee + h) - example.force_n(knee)) / h;
  const double below = (example.force_n(knee) - example.force_n(knee - h)) / h;
  CHECK(example.slope_at(knee) == Approx(above).epsilon(1e-5));
  CHECK(example.slope_at(knee) < 0.1 * below);
}

TEST_CASE("without a bleed the valve is a platform", "[damper]") {
  const Law platform{.opening_n = 200.0, .slope_n_s_m = 300.0};
  CHECK(platform.knee_m_s() == 0.0);
  CHECK(platform.force_n(0.0) == 200.0);
  CHECK(platform.force_n(1e-12) == Approx(200.0).epsilon(1e-11));
  CHECK(platform.force_n(2.0) == Approx(800.0).epsilon(1e-14));
  CHECK(platform.speed_m_s(199.0) == 0.0);
  CHECK(platform.speed_m_s(500.0) == Approx(1.0).epsilon(1e-14));
  CHECK(platform.slope_at(0.0) == 300.0);
}

TEST_CASE("extremes stay finite and right", "[damper]") {
  // A bleed that passes everything leaves the port alone.
  const Law port{.bleed_m_s = infinite, .port_n_s2_m2 = 800.0};
  CHECK(port.force_n(2.0) == 3200.0);
  CHECK(port.speed_m_s(3200.0) == 2.0);
  // A huge bleed beside a valve: F_p -> 100 (v / B)^2, without cancellation.
  const Law wide{.bleed_m_s = 1e9, .opening_n = 0.0, .slope_n_s_m = 1000.0};
  CHECK(wide.force_n(1.0) == Approx(1e-16).epsilon(1e-8));
  // A tiny bleed, an enormous slope, an enormous port.
  const Law tiny{.bleed_m_s = 1e-150, .opening_n = 50.0, .slope_n_s_m = 100.0};
  CHECK(tiny.force_n(1.0) == Approx(150.0).epsilon(1e-14));
  const Law stiff{.bleed_m_s = 0.1, .opening_n = 50.0, .slope_n_s_m = 1e12};
  CHECK(stiff.force_n(0.5) == Approx(2500.0).epsilon(1e-8));
  const Law plugged{
      .bleed_m_s = 0.1, .opening_n = 50.0, .slope_n_s_m = 100.0, .port_n_s2_m2 = 1e12};
  CHECK(plugged.speed_m_s(plugged.force_n(0.3)) == Approx(0.3).epsilon(1e-12));
}

TEST_CASE("no speed means no force, and not-a-number stays so", "[damper]") {
  CHECK(example.force_n(0.0) == 0.0);
  CHECK(example.speed_m_s(0.0) == 0.0);
  CHECK(std::isnan(example.force_n(std::nan(""))));
  const Curve curve{example, Law{.bleed_m_s = 0.2}, false};
  CHECK(curve.force_n(0.0) == 0.0);
  CHECK(std::isnan(curve.force_n(std::nan(""))));
}

TEST_CASE("a curve's force has the sign of its velocity", "[damper]") {
  const Law rebound{.bleed_m_s = 0.2};
  const Curve curve{example, rebound, false};
  CHECK(curve.force_n(0.4) == example.force_n(0.4));
  CHECK(curve.force_n(-0.4) == -rebound.force_n(0.4));
}
