#include "clickwise/damper/damper.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/bike/spring.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/damper/effect.hpp"
#include "support/bike_text.hpp"
#include "support/random_damper.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using bike::Adjuster;
using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;
using damper::Damper;
using test::refusal;
using test::replaced;

namespace {

bike::Bike larch() {
  return bike::parse_bike(test::larch_text, "larch.toml");
}

Damper front() {
  const bike::Bike b = larch();
  return Damper::from(*b.front, {}, b.front->damper_place);
}

// c of equal energy per cycle over a sine of peak speed V (check value 1.2e's definition).
double equivalent_damping(const damper::Curve& curve, double V) {
  constexpr int n = 20000;
  double sum = 0.0;
  for (int i = 0; i < n; ++i) {
    const double sine = std::sin(2.0 * std::numbers::pi * (i + 0.5) / n);
    sum += curve.force_n(V * sine) * sine;
  }
  return 2.0 * sum / n / V;
}

bike::End assumed_end(bike::CurveShape shape, double ratio = 1.0) {
  bike::End end;
  end.stroke_m = 0.17;
  end.ratio = core::Polyline::constant(ratio);
  end.spring = bike::Spring{bike::CoilSpring{9000.0 * ratio * ratio, 0.0}, std::nullopt};
  bike::AssumedDamper assumed;
  assumed.shape = shape;
  assumed.bleed_compression = bike::Clicks{0, 0, 16, 8};
  assumed.valve_compression = bike::Clicks{0, 0, 12, 6};
  assumed.bleed_rebound = bike::Clicks{0, 0, 18, 0};
  end.damper = assumed;
  return end;
}

constexpr double reference_m_s = 0.4;  // docs/method/damper.md, section 3

}  // namespace

TEST_CASE("a hydraulic damper's curve is that of its settings", "[damper]") {
  const damper::Curve curve = front().curve();
  CHECK(curve.compression.bleed_m_s == Approx(0.101).epsilon(1e-15));
  CHECK(curve.compression.opening_n == 380.0);
  CHECK(curve.rebound.opening_n == 90.0);
  CHECK(curve.rebound.port_n_s2_m2 == 30.0);
  CHECK(!curve.assumed);
}

TEST_CASE("adjusters are those with clicks, and settings are held to their range", "[damper]") {
  const Damper d = front();
  REQUIRE(d.adjusters().size() == 3);
  CHECK(!d.adjuster(Adjuster::high_speed_rebound));
  CHECK(d.adjuster(Adjuster::high_speed_compression)->clicks == 12);
  CHECK(d.with(Adjuster::low_speed_rebound, 99).adjuster(Adjuster::low_speed_rebound)->setting ==
        18);
  CHECK(d.with(Adjuster::low_speed_rebound, -3).adjuster(Adjuster::low_speed_rebound)->setting ==
        0);
  CHECK(d.curve_with(Adjuster::high_speed_compression, 0).compression.opening_n == 620.0);
  CHECK(d.curve_with(Adjuster::high_speed_rebound, 0).rebound.opening_n == 90.0);
  CHECK(d.with(Adjuster::low_speed_compression, 4)
            .with(Adjuster::high_speed_compression, 2)
            .curve()
            .compression.opening_n == 540.0);
}

TEST_CASE("an assumed damper has the damping ratio that was asked for, at every shape",
          "[damper]") {
  const double mass_kg = 20.0;
  // Critical damping of 20 kg on 9000 N/m: 848.5281374 N s/m (closed form).
  const double critical = 848.5281374;
  for (const auto shape :
       {bike::CurveShape::digressive, bike::CurveShape::linear, bike::CurveShape::progressive}) {
    const Damper d = Damper::from(assumed_end(shape), mass_kg, {"larch.toml"});
    CHECK(d.assumed());
    CHECK(d.curve().assumed);
    // Midpoint rules of 400 and 20000 cells agree within 1e-5 across the knee.
    CHECK(equivalent_damping(d.curve(), reference_m_s) / critical == Approx(0.30).epsilon(1e-4));
  }
}

TEST_CASE("behind a linkage the assumed damper gives the wheel the same ratio", "[damper]") {
  // Wheel damping is shaft damping over the ratio squared (virtual work).
  const double r = 2.5;
  const Damper d = Damper::from(assumed_end(bike::CurveShape::linear, r), 20.0, {"larch.toml"});
  const double at_wheel = equivalent_damping(d.curve(), reference_m_s) / (r * r);
  CHECK(at_wheel / 848.5281374 == Approx(0.30).epsilon(1e-4));
}

TEST_CASE("the assumed shapes bend as their names say", "[damper]") {
  const auto bend = [](bike::CurveShape shape) {
    const damper::Law law =
        Damper::from(assumed_end(shape), 20.0, {"larch.toml"}).curve().compression;
    return (law.force_n(2.0) / 2.0) / (law.force_n(0.1) / 0.1);
  };
  CHECK(bend(bike::CurveShape::digressive) < 0.5);
  CHECK(bend(bike::CurveShape::linear) == Approx(1.0).margin(0.35));
  CHECK(bend(bike::CurveShape::progressive) > 2.0);
}

TEST_CASE("an assumed damper's clicks go through its curve at the present setting", "[damper]") {
  const Damper d = Damper::from(assumed_end(bike::CurveShape::digressive), 20.0, {"larch.toml"});
  REQUIRE(d.adjusters().size() == 3);
  const bike::HydraulicSide& compression = d.sides().compression;
  CHECK(compression.bleed->open > compression.bleed->closed);
  CHECK(compression.valve->open < compression.valve->closed);
  CHECK(d.curve_with(Adjuster::low_speed_rebound, 18).force_n(-0.1) > d.curve().force_n(-0.1));
  bike::End other = assumed_end(bike::CurveShape::digressive);
  std::get<bike::AssumedDamper>(*other.damper).bleed_compression->setting = 3;
  const Damper moved = Damper::from(other, 20.0, {"larch.toml"});
  CHECK(moved.curve().force_n(0.1) == Approx(d.curve().force_n(0.1)).epsilon(1e-12));
}

TEST_CASE("a damper that cannot be laid out says what to write", "[damper]") {
  bike::End end = assumed_end(bike::CurveShape::linear);
  const core::Place place{"larch.toml", 9, 1};
  CHECK_THAT(refusal<core::JobError>([&] { Damper::from(end, {}, place); }),
             StartsWith("larch.toml:9:1: ") && Contains("rider.mass_kg"));
  end.spring.reset();
  CHECK_THAT(refusal<core::JobError>([&] { Damper::from(end, 20.0, place); }),
             Contains("spring") && Contains("; add"));
  end.damper.reset();
  CHECK_THAT(refusal<core::JobError>([&] { Damper::from(end, 20.0, place); }),
             Contains("no damper"));
  bike::End slack = assumed_end(bike::CurveShape::linear);
  slack.spring = bike::Spring{bike::TableSpring{core::Polyline({0.0, 0.1}, {100, 100})}, {}};
  CHECK_THAT(refusal<core::JobError>([&] { Damper::from(slack, 20.0, place); }),
             Contains("rate at sag"));
}

TEST_CASE("the table of a click's effect is the difference of two curves", "[damper]") {
  const Damper d = front();
  const std::vector<double> speeds{0.1, 1.0};
  const damper::EffectTable table = damper::effect_table(d, speeds);
  REQUIRE(table.clicks.size() == 3);
  const damper::ClickEffect& high = table.clicks[1];
  CHECK(high.range.adjuster == Adjuster::high_speed_compression);
  CHECK(high.firmer_n[1] ==
        d.curve_with(Adjuster::high_speed_compression, 5).force_n(1.0) - d.curve().force_n(1.0));
  CHECK(high.firmer_n[1] > 0.0);
  CHECK(high.softer_n[1] < 0.0);
  CHECK(high.firmer_n[0] == 0.0);  // 0.1 m/s lies below the knee, where only the bleed acts
  CHECK(table.rebound_n[1] == -d.curve().force_n(-1.0));
  CHECK(table.compression_knee_m_s == d.curve().compression.knee_m_s());
}

TEST_CASE("an adjuster at its end has no click that way", "[damper]") {
  const Damper d = front().with(Adjuster::low_speed_compression, 0);
  const damper::EffectTable table = damper::effect_table(d, damper::usual_speeds_m_s());
  CHECK(table.clicks[0].firmer_n.empty());
  CHECK(table.clicks[0].softer_n.size() == table.speed_m_s.size());
}
