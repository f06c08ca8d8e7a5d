// Rides whose cause of trouble is known, from the noisy log alone to what a setter is told. Each
// cause on several trails; the advised step is then ridden on the same trail, and the trouble must
// be less.
#include <algorithm>
#include <catch2/catch.hpp>

#include "clickwise/damper/damper.hpp"
#include "workflow/fork_ride.hpp"

using namespace clickwise;
using advice::SymptomKind;
using bike::Adjuster;
using test::Fork;
using test::ForkRide;
using test::Obstacle;

namespace {

constexpr double length_m = 500.0;
constexpr double speed_m_s = 7.5;
constexpr std::uint64_t seeds[] = {1, 2, 3};

const Obstacle rocks{"kind = \"rock_garden\"\nlength_m = 15\nper_m = 1.0\nheight_m = 0.07", 35.0};

Obstacle drop(double height_m) {
  return {fmt::format("kind = \"drop\"\nheight_m = {}", height_m), 30.0};
}

Obstacle hollow(double depth_m, double long_m) {
  return {fmt::format("kind = \"compression\"\ndepth_m = {}\nlength_m = {}", depth_m, long_m),
          30.0};
}

Obstacle roots(double height_m, int count, double spacing_m) {
  return {fmt::format("kind = \"roots\"\nheight_m = {}\nlength_m = 0.16\ncount = {}\n"
                      "spacing_m = {}",
                      height_m, count, spacing_m),
          25.0};
}

// A fork on one kind of trail.
struct Case {
  Fork fork;
  std::string roughness;
  std::vector<Obstacle> obstacles;

  ForkRide ride(std::uint64_t seed) const {
    return {fork, test::trail_text(roughness, obstacles, length_m, seed), length_m, speed_m_s,
            seed};
  }
};

// The figure of a symptom that a step was advised for; its aim when it is met.
double figure_of(const workflow::Review& review, const advice::Symptom& symptom) {
  for (const advice::Symptom& found : review.advice.symptoms)
    if (found.kind == symptom.kind) return found.value;
  return symptom.aim;
}

void set(Fork& fork, Adjuster adjuster, int clicks) {
  switch (adjuster) {
    case Adjuster::low_speed_compression:
      fork.low_speed_compression = clicks;
      break;
    case Adjuster::high_speed_compression:
      fork.high_speed_compression = clicks;
      break;
    case Adjuster::low_speed_rebound:
      fork.low_speed_rebound = clicks;
      break;
    case Adjuster::high_speed_rebound:
      FAIL("this fork has no high-speed rebound adjuster");
  }
}

// Rides the case with the step made, and asks that the symptom is nearer to its aim.
void require_that_it_helps(Case made, const advice::Step& step, std::uint64_t seed) {
  set(made.fork, step.adjuster, step.to);
  const double then = figure_of(made.ride(seed).review(), step.symptom);
  CAPTURE(advice::words(step.symptom.kind), step.symptom.value, then, step.symptom.aim);
  CHECK(step.symptom.sign * (then - step.symptom.aim) <
        step.symptom.sign * (step.symptom.value - step.symptom.aim));
}

// The one step that a case is advised on every trail.
void require_step(const Case& made, Adjuster adjuster, bool firmer) {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    const advice::Advice advice = made.ride(seed).review().advice;
    REQUIRE(advice.steps.size() == 1);
    const advice::Step& step = advice.steps.front();
    CAPTURE(step.why);
    CHECK(bike::to_string(step.adjuster) == bike::to_string(adjuster));
    CHECK((step.to < step.from) == firmer);
    CHECK(step.seed.has_value());
    CHECK(step.confidence >= 0.7);
    for (const advice::Prediction& figure : step.predicted) {
      CHECK(figure.low <= figure.then);
      CHECK(figure.then <= figure.high);
    }
    require_that_it_helps(made, step, seed);
  }
}

Case wallowing() {
  return {{.low_speed_compression = 3,
           .valve_open_n = 10.0,
           .high_speed_compression = 12,
           .valve_slope_n_s_m = 80.0,
           .low_speed_rebound = 12,
           .rebound_valve_n = 20.0,
           .rebound_slope_n_s_m = 80.0},
          "B",
          {hollow(0.5, 8.0), rocks, drop(0.3)}};
}

Case packing() {
  return {{.low_speed_rebound = 0, .rebound_valve_n = 250.0}, "C", {roots(0.08, 6, 1.2)}};
}

Case slow_bottoming() {
  return {{.spring = "[[0, 60], [40, 200], [120, 480], [170, 800]]"},
          "B",
          {hollow(1.4, 12.0), hollow(1.8, 12.0)}};
}

}  // namespace

// The valve opens at 10 N, and no bleed can hold more than that: three clicks of it are worth 0.5 N
// at 0.15 m/s, one click of the valve's preload 30 N.
TEST_CASE("support beyond the valve's opening force is preload, not bleed",
          "[workflow][advice][slow]") {
  require_step(wallowing(), Adjuster::high_speed_compression, true);
}

TEST_CASE("a ride that packs is given faster rebound", "[workflow][advice][slow]") {
  SECTION("it stays down from hit to hit") {
    require_step(packing(), Adjuster::low_speed_rebound, false);
  }
  SECTION("and climbs through its travel in a train") {
    const Case made{
        {.low_speed_rebound = 1, .rebound_valve_n = 400.0, .rebound_slope_n_s_m = 1500.0},
        "C",
        {roots(0.1, 4, 1.5)}};
    require_step(made, Adjuster::low_speed_rebound, false);
  }
}

TEST_CASE("a platform that holds the wheel is opened at the bleed", "[workflow][advice][slow]") {
  for (const int preload : {8, 12}) {
    CAPTURE(preload);
    const Case made{{.compression_closed_mm_s = 0.0,
                     .low_speed_compression = 0,
                     .valve_closed_n = 500.0,
                     .valve_open_n = 200.0,
                     .high_speed_compression = preload},
                    "B",
                    {roots(0.05, 8, 0.9), hollow(0.9, 8.0), drop(0.6)}};
    require_step(made, Adjuster::low_speed_compression, false);
  }
}

TEST_CASE("slow bottoming is for the spring and not for clicks", "[workflow][advice][slow]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    const advice::Advice advice = slow_bottoming().ride(seed).review().advice;
    CHECK(advice.steps.empty());
    const auto handed = std::find_if(advice.handovers.begin(), advice.handovers.end(),
                                     [](const advice::Handover& handover) {
                                       return handover.symptom.kind == SymptomKind::slow_bottoming;
                                     });
    REQUIRE(handed != advice.handovers.end());
    CHECK(handed->to == "spring");
  }
}

TEST_CASE("a ride at its aims is left alone, from the log to the advice",
          "[workflow][advice][slow]") {
  for (const std::uint64_t seed : seeds) {
    CAPTURE(seed);
    const Case made{{}, "D", {drop(0.4), rocks, hollow(0.5, 7.0), roots(0.05, 8, 0.9)}};
    const advice::Advice advice = made.ride(seed).review().advice;
    CHECK(advice.steps.empty());
    CHECK(advice.handovers.empty());
    CHECK_FALSE(advice.leave_it.empty());
  }
}

TEST_CASE("a bike file that cannot be right gets a check and no step", "[workflow][advice][slow]") {
  Fork wrong = packing().fork;
  wrong.rider_kg = 45.0;
  const advice::Advice advice = packing().ride(1).review_with(wrong).advice;
  CHECK(advice.steps.empty());
  CHECK(advice.handovers.empty());
  REQUIRE(advice.checks.size() == 1);
  CHECK(advice.checks[0].find("rider.mass_kg") != std::string::npos);
  CHECK(advice.leave_it.find("bike file") != std::string::npos);
}

TEST_CASE("advice falls back to rules where the bike file knows too little, and says so",
          "[workflow][advice][slow]") {
  Fork unknown = packing().fork;
  const ForkRide ride = packing().ride(1);
  const workflow::Review by_rule = ride.review(true);
  CHECK(by_rule.advice.notes.empty());
  for (const advice::Step& step : by_rule.advice.steps) CHECK_FALSE(step.seed.has_value());

  unknown.unsprung_mass.clear();
  const workflow::Review fallen_back = ride.review_with(unknown);
  REQUIRE(fallen_back.advice.notes.size() == 1);
  CHECK(fallen_back.advice.notes[0].find("front.unsprung_mass_kg") != std::string::npos);
  for (const advice::Step& step : fallen_back.advice.steps) CHECK_FALSE(step.seed.has_value());
}

TEST_CASE("an assumed damper makes a step less sure, and the reason says so",
          "[workflow][advice][slow]") {
  Fork assumed = wallowing().fork;
  assumed.damper =
      "kind = \"assumed\"\ndamping_ratio = 0.10\nshape = \"progressive\"\n"
      "[front.damper.compression]\nbleed = { clicks = 16, setting = 8 }\nvalve = { clicks = 12, "
      "setting = 8 }\n"
      "[front.damper.rebound]\nbleed = { clicks = 18, setting = 9 }\n";
  const advice::Advice advice = wallowing().ride(1).review_with(assumed).advice;
  REQUIRE(advice.steps.size() == 1);
  CHECK(advice.steps[0].confidence <= 0.85);
  CHECK(advice.steps[0].why.find("assumed") != std::string::npos);
}
