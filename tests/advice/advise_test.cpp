#include "clickwise/advice/advise.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

#include "clickwise/advice/find_symptoms.hpp"
#include "support/dyno_points.hpp"

using namespace clickwise;
using advice::SymptomKind;

namespace {

constexpr double rate_hz = 500.0;

bike::HydraulicDamper larch_fork_damper() {
  bike::HydraulicDamper damper;
  damper.compression.bleed = bike::Clicks{0.012, 0.190, 16, 8};
  damper.compression.valve = bike::Clicks{620.0, 140.0, 12, 6};
  damper.compression.slope_n_s_m = 180.0;
  damper.compression.port_n_s2_m2 = 22.0;
  damper.rebound.bleed = bike::Clicks{0.025, 0.320, 18, 9};
  damper.rebound.fixed_valve_n = 90.0;
  damper.rebound.slope_n_s_m = 520.0;
  damper.rebound.port_n_s2_m2 = 30.0;
  return damper;
}

// A ride written down by hand: a slow sine around a mean travel, two minutes long, with the given
// bottom-outs noted beside it.
struct WrittenRide {
  bike::End end;
  run::Motion motion;
  std::vector<std::uint8_t> counted;
  std::vector<run::EndStop> bottom_outs;
  std::vector<run::EndStop> top_outs;
  std::vector<run::HitTrain> trains;
  damper::Damper damper{larch_fork_damper()};

  WrittenRide(double mean_share, double swing_share) {
    end.stroke_m = 0.170;
    end.spring = bike::Spring{bike::TableSpring{core::Polyline({0.0, 0.17}, {90.0, 1500.0})}, {}};
    motion.time = {0.0, rate_hz, static_cast<std::size_t>(120.0 * rate_hz)};
    const double omega = 2.0 * std::numbers::pi * 1.5;
    for (std::size_t i = 0; i < motion.time.samples; ++i) {
      const double phase = omega * motion.time.at(i);
      motion.travel_m.push_back(end.stroke_m * (mean_share + swing_share * std::sin(phase)));
      motion.velocity_m_s.push_back(end.stroke_m * swing_share * omega * std::cos(phase));
    }
    motion.valid.assign(motion.time.samples, 1);
    counted = motion.valid;
  }

  advice::EndRide view() const {
    advice::EndRide ride;
    ride.end = &end;
    ride.motion = &motion;
    ride.counted = &counted;
    ride.bottom_outs = &bottom_outs;
    ride.top_outs = &top_outs;
    ride.trains = &trains;
    ride.damper = &damper;
    ride.sprung_mass_kg = 37.0;
    ride.compression_split_m_s = 0.7;
    ride.rebound_split_m_s = 0.7;
    return ride;
  }
};

// At every default aim: mean travel 30 %, largest 92 % of the stroke.
WrittenRide good_ride() {
  return {0.30, 0.62};
}

bool shows(const std::vector<advice::Symptom>& symptoms, SymptomKind kind) {
  return std::any_of(symptoms.begin(), symptoms.end(),
                     [&](const advice::Symptom& symptom) { return symptom.kind == kind; });
}

}  // namespace

TEST_CASE("a ride at its aims is left alone", "[advice]") {
  const WrittenRide ride = good_ride();
  const advice::Advice advice = advice::advise({ride.view()}, bike::Aims{});
  CHECK(advice.symptoms.empty());
  CHECK(advice.steps.empty());
  CHECK(advice.handovers.empty());
  CHECK_FALSE(advice.leave_it.empty());
}

TEST_CASE("bottom-outs met above the split ask for firmer high-speed compression", "[advice]") {
  WrittenRide ride = good_ride();
  for (int i = 0; i < 6; ++i)
    ride.bottom_outs.push_back({10.0 + 15.0 * i + 0.1, 0.169, 1.2 + 0.1 * i, 20.0});
  const advice::Advice advice = advice::advise({ride.view()}, bike::Aims{});
  REQUIRE(advice.steps.size() == 1);
  const advice::Step& step = advice.steps.front();
  CHECK(bike::acts_in_compression(step.adjuster));
  CHECK(step.to < step.from);
  CHECK(step.from - step.to <= 3);
  CHECK(step.confidence >= 0.7);
  REQUIRE(step.predicted.size() == 1);
  CHECK(step.predicted[0].metric == "bottom_outs");
  CHECK(step.predicted[0].now == 6.0);
  CHECK(step.predicted[0].low <= step.predicted[0].then);
  CHECK(step.predicted[0].then <= step.predicted[0].high);
}

TEST_CASE("bottom-outs met below the split are handed to the spring", "[advice]") {
  WrittenRide ride = good_ride();
  for (int i = 0; i < 6; ++i) ride.bottom_outs.push_back({10.0 + 15.0 * i, 0.169, 0.3, 2.0});
  const advice::Advice advice = advice::advise({ride.view()}, bike::Aims{});
  CHECK(advice.steps.empty());
  REQUIRE(advice.handovers.size() == 1);
  CHECK(advice.handovers[0].to == "spring");
  CHECK(advice.handovers[0].symptom.kind == SymptomKind::slow_bottoming);
}

TEST_CASE("an adjuster already closed is not turned further", "[advice]") {
  WrittenRide ride = good_ride();
  bike::HydraulicDamper sides = larch_fork_damper();
  sides.compression.bleed->setting = 0;
  sides.compression.valve->setting = 0;
  ride.damper = damper::Damper(sides);
  for (int i = 0; i < 6; ++i) ride.bottom_outs.push_back({10.0 + 15.0 * i, 0.169, 1.5, 40.0});
  const advice::Advice advice = advice::advise({ride.view()}, bike::Aims{});
  CHECK(advice.steps.empty());
  REQUIRE(advice.handovers.size() == 1);
  CHECK(advice.handovers[0].to == "volume");
}

TEST_CASE("a step never leaves the adjuster's range nor exceeds three clicks", "[advice]") {
  for (int setting = 0; setting <= 12; ++setting) {
    WrittenRide ride = good_ride();
    bike::HydraulicDamper sides = larch_fork_damper();
    sides.compression.valve->setting = setting;
    ride.damper = damper::Damper(sides);
    for (int i = 0; i < 20; ++i) ride.bottom_outs.push_back({5.0 + 5.0 * i, 0.17, 3.0, 150.0});
    for (const advice::Step& step : advice::advise({ride.view()}, bike::Aims{}).steps) {
      CAPTURE(setting, step.from, step.to);
      const auto range = ride.damper.adjuster(step.adjuster);
      CHECK(step.to >= 0);
      CHECK(step.to <= range->clicks);
      CHECK(std::abs(step.to - step.from) >= 1);
      CHECK(std::abs(step.to - step.from) <= 3);
    }
  }
}

TEST_CASE("packing asks for faster rebound, top-outs for slower", "[advice]") {
  WrittenRide packing = good_ride();
  for (int i = 0; i < 8; ++i)
    packing.trains.push_back({5.0 + 12.0 * i, 7.0 + 12.0 * i, 5, 0.04, 0.004 + 0.0005 * (i % 3)});
  const advice::Advice faster = advice::advise({packing.view()}, bike::Aims{});
  REQUIRE(faster.steps.size() == 1);
  CHECK(faster.steps[0].adjuster == bike::Adjuster::low_speed_rebound);
  CHECK(faster.steps[0].to > faster.steps[0].from);

  WrittenRide topping = good_ride();
  for (int i = 0; i < 90; ++i) topping.top_outs.push_back({2.0 + 1.3 * i, 0.0, -1.0, 10.0});
  const advice::Advice slower = advice::advise({topping.view()}, bike::Aims{});
  REQUIRE(slower.steps.size() == 1);
  CHECK(slower.steps[0].adjuster == bike::Adjuster::low_speed_rebound);
  CHECK(slower.steps[0].to < slower.steps[0].from);
}

TEST_CASE("an assumed damper lowers the confidence of the same step", "[advice]") {
  WrittenRide ride = good_ride();
  for (int i = 0; i < 12; ++i) ride.bottom_outs.push_back({5.0 + 9.0 * i, 0.169, 1.5, 40.0});
  const double measured = advice::advise({ride.view()}, bike::Aims{}).steps.at(0).confidence;
  ride.damper = damper::Damper(larch_fork_damper(), true);
  const advice::Step assumed = advice::advise({ride.view()}, bike::Aims{}).steps.at(0);
  CHECK(assumed.confidence < measured);
  CHECK(assumed.why.find("curve is assumed") != std::string::npos);
}

TEST_CASE("clicks that the dyno table does not tell lower the confidence, and the reason says so",
          "[advice]") {
  WrittenRide ride = good_ride();
  for (int i = 0; i < 12; ++i) ride.bottom_outs.push_back({5.0 + 9.0 * i, 0.169, 1.5, 40.0});
  const auto step_on_dyno = [&](const std::vector<double>& settings) {
    bike::End end = ride.end;
    end.damper = test::dyno_points(damper::Damper(larch_fork_damper()),
                                   {test::even_speeds(12, 0.02, 3.0), settings});
    ride.damper = damper::Damper::from(end, 37.0, {});
    return advice::advise({ride.view()}, bike::Aims{}).steps.at(0);
  };
  const advice::Step measured = step_on_dyno({0.0, 0.5, 1.0});
  const advice::Step at_one_setting = step_on_dyno({0.5});
  CHECK(at_one_setting.adjuster == measured.adjuster);
  CHECK(at_one_setting.confidence < measured.confidence);
  CHECK(at_one_setting.why.find("dyno table does not tell") != std::string::npos);
  CHECK(measured.why.find("less sure") == std::string::npos);
}

TEST_CASE("mean travel outside its aims rides deep or high", "[advice]") {
  const bike::Aims aims;
  const WrittenRide deep(0.45, 0.47);
  const WrittenRide high(0.15, 0.14);
  CHECK(shows(advice::find_symptoms({deep.view()}, aims, 1), SymptomKind::rides_deep));
  const auto symptoms = advice::find_symptoms({high.view()}, aims, 1);
  CHECK(shows(symptoms, SymptomKind::rides_high));
  CHECK(shows(symptoms, SymptomKind::unused_travel));
}

TEST_CASE("a log too short to judge shows no symptom", "[advice]") {
  WrittenRide ride(0.45, 0.47);
  std::fill(ride.counted.begin() + static_cast<long>(5.0 * rate_hz), ride.counted.end(), 0);
  CHECK(advice::find_symptoms({ride.view()}, bike::Aims{}, 1).empty());
}

TEST_CASE("the same seed gives the same advice", "[advice]") {
  WrittenRide ride(0.41, 0.50);
  const auto first = advice::find_symptoms({ride.view()}, bike::Aims{}, 7);
  const auto second = advice::find_symptoms({ride.view()}, bike::Aims{}, 7);
  REQUIRE(first.size() == second.size());
  for (std::size_t i = 0; i < first.size(); ++i) CHECK(first[i].severity == second[i].severity);
}
