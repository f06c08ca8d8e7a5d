// Facts of the trade as properties of the law, over random dampers. Common practice, no source.
#include <catch2/catch.hpp>

#include "clickwise/damper/damper.hpp"
#include "support/random_damper.hpp"

using namespace clickwise;
using bike::Adjuster;
using damper::Damper;
using damper::Law;
using test::RandomDampers;

namespace {

constexpr int draws = 500;

Damper random_damper(RandomDampers& dampers) {
  return Damper(bike::HydraulicDamper{dampers.side(), dampers.side()});
}

Law softer(const Damper& d, Adjuster adjuster) {
  const auto curve = d.curve_with(adjuster, d.adjuster(adjuster)->setting + 1);
  return bike::acts_in_compression(adjuster) ? curve.compression : curve.rebound;
}

}  // namespace

TEST_CASE("closing any adjuster never lowers the force at any speed", "[damper]") {
  RandomDampers dampers(21);
  for (int i = 0; i < draws; ++i) {
    const Damper d = random_damper(dampers);
    for (const Adjuster adjuster : bike::all_adjusters) {
      const int setting = d.adjuster(adjuster)->setting;
      const double sign = bike::acts_in_compression(adjuster) ? 1.0 : -1.0;
      for (double v = 0.01; v < 4.0; v *= 1.6) {
        const double now = d.curve().force_n(sign * v) * sign;
        const double firmer = d.curve_with(adjuster, setting - 1).force_n(sign * v) * sign;
        CHECK(firmer >= now * (1.0 - 1e-14));
      }
    }
  }
}

TEST_CASE("an adjuster leaves the other direction alone", "[damper]") {
  RandomDampers dampers(22);
  for (int i = 0; i < draws; ++i) {
    const Damper d = random_damper(dampers);
    const double v = dampers.between(0.05, 3.0);
    CHECK(d.curve_with(Adjuster::low_speed_compression, 0).force_n(-v) == d.curve().force_n(-v));
    CHECK(d.curve_with(Adjuster::high_speed_rebound, 0).force_n(v) == d.curve().force_n(v));
  }
}

TEST_CASE("more preload shifts the high-speed part and leaves its slope", "[damper]") {
  RandomDampers dampers(23);
  for (int i = 0; i < draws; ++i) {
    const Damper d = random_damper(dampers);
    const Law now = d.curve().compression;
    const Law soft = softer(d, Adjuster::high_speed_compression);
    // Far above both knees the bleed's part dies away as 1/sqrt(F): compare slopes there.
    const double v = 1e6 * now.knee_m_s();
    CHECK(soft.slope_at(v) == Approx(now.slope_at(v)).epsilon(1e-3));
    CHECK(now.force_n(v) - soft.force_n(v) > 0.0);
    // Without bleed it is exact: the whole curve moves by the change of the opening force.
    Law bare = now;
    Law bare_soft = soft;
    bare.bleed_m_s = bare_soft.bleed_m_s = 0.0;
    CHECK(bare.force_n(1.0) - bare_soft.force_n(1.0) ==
          Approx(now.opening_n - soft.opening_n).epsilon(1e-9));
  }
}

TEST_CASE("more preload leaves the curve below the lower knee alone", "[damper]") {
  RandomDampers dampers(24);
  for (int i = 0; i < draws; ++i) {
    const Damper d = random_damper(dampers);
    const Law soft = softer(d, Adjuster::high_speed_rebound);
    const double v = 0.999 * soft.knee_m_s();
    CHECK(soft.force_n(v) == d.curve().rebound.force_n(v));
  }
}

TEST_CASE("opening the bleed softens low speed and, beside a wide valve, leaves high speed alone",
          "[damper]") {
  RandomDampers dampers(25);
  for (int i = 0; i < draws; ++i) {
    bike::HydraulicSide side = dampers.side();
    side.slope_n_s_m = 1.0;  // much more area than the bleed
    const Damper d(bike::HydraulicDamper{side, side});
    const Law now = d.curve().compression;
    const Law soft = softer(d, Adjuster::low_speed_compression);
    const double low = 0.5 * now.knee_m_s();
    CHECK(soft.force_n(low) < 0.995 * now.force_n(low));
    const double high = now.knee_m_s() + 2.0;
    // The valve passes all but the bleed's flow, so the force moves by at most S times its change.
    const double flow_m_s = (soft.bleed_m_s - now.bleed_m_s) * std::sqrt(now.force_n(high) / 100.0);
    CHECK(now.force_n(high) - soft.force_n(high) >= -1e-12 * now.force_n(high));
    CHECK(now.force_n(high) - soft.force_n(high) <= 1.0 * flow_m_s * (1.0 + 1e-9) + 1e-9);
  }
}

TEST_CASE("the force that the bleed can build is capped by the preload", "[damper]") {
  RandomDampers dampers(26);
  for (int i = 0; i < draws; ++i) {
    const Damper d = random_damper(dampers);
    const Law closed = d.curve_with(Adjuster::low_speed_compression, 0).compression;
    const double v = dampers.between(0.02, 2.0);
    // However far the bleed closes, F <= F_o + S v + P v^2: more support needs more preload.
    CHECK(closed.force_n(v) <=
          (closed.opening_n + closed.slope_n_s_m * v + closed.port_n_s2_m2 * v * v) *
              (1.0 + 1e-12));
    const Law more = d.curve_with(Adjuster::high_speed_compression, 0).compression;
    CHECK(more.opening_n > d.curve().compression.opening_n);
  }
}

TEST_CASE("without a preloaded valve one rebound knob acts at every speed", "[damper]") {
  RandomDampers dampers(27);
  for (int i = 0; i < draws; ++i) {
    bike::HydraulicSide side = dampers.side();
    side.valve.reset();
    side.slope_n_s_m = side.port_n_s2_m2 = 0.0;
    const Damper d(bike::HydraulicDamper{side, side});
    const Law now = d.curve().rebound;
    const Law soft = softer(d, Adjuster::low_speed_rebound);
    const double share = soft.force_n(0.05) / now.force_n(0.05);
    CHECK(share < 1.0);
    for (const double v : {0.2, 1.0, 3.0})
      CHECK(soft.force_n(v) / now.force_n(v) == Approx(share).epsilon(1e-12));
  }
}
