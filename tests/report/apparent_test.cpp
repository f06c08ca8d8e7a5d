// The damper as ridden, from the written log to the report.
#include <catch2/catch.hpp>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/report/review_html.hpp"
#include "clickwise/report/review_json.hpp"
#include "clickwise/report/review_text.hpp"
#include "support/bike_text.hpp"
#include "support/invented_log.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

// The practice run with an accelerometer on the fork's sprung side.
sim::Scene with_accelerometer(const std::string& key) {
  sim::Scene scene = test::demo_scene("practice-run/scene.toml");
  scene.logger.faults.clear();
  scene.bike = bike::parse_bike(test::replaced(scene.bike.text, "friction_n = 15.0",
                                               "friction_n = 15.0\nsprung_accel = " + key),
                                scene.bike.file);
  scene.logger.sprung_accel = {.noise_g = 0.05, .range_g = 8.0, .decimals = 3};
  return scene;
}

const std::string up_in_g = "{ column = \"fork_az\", unit = \"g\" }";

}  // namespace

TEST_CASE("a log with an accelerometer is told the damper as ridden", "[workflow][slow]") {
  const sim::Scene scene = with_accelerometer(up_in_g);
  const sim::Truth truth = sim::simulate(scene);
  const test::ScratchFolder folder;
  const auto review = test::log_and_review(scene, truth, folder.path());
  REQUIRE(review.ends[0].apparent);
  const sim::ApparentDamper& found = *review.ends[0].apparent;
  REQUIRE(found.problem.empty());
  CHECK(!review.ends[1].apparent);
  CHECK(found.friction_n.value == Approx(15.0).margin(4.0));
  CHECK(found.spring_share.value == Approx(1.0).margin(0.02));
  REQUIRE(found.rebound.size() > 5);
  // 2 N and 1.2 % of shape, a few N of scatter: three deviations of both.
  for (const auto& point : found.rebound)
    CHECK(point.force_n.value == Approx(*point.bike_file_n).epsilon(0.05).margin(12.0));
  REQUIRE(found.fade);
  CHECK(!found.fade->clear);
  // Hits beyond 8 g are clipped: masked, and counted.
  CHECK(review.log.faults.count(run::FaultKind::saturated) > 0);

  CHECK_THAT(report::review_json(review), Contains("\"apparent_damper\""));
  CHECK_THAT(report::review_text(review), Contains("the damper as ridden") &&
                                              Contains("no clear fade") && Contains("friction 1"));
  CHECK_THAT(report::review_html(review), Contains("The damper as ridden"));
}

TEST_CASE("an accelerometer logged upside down is named, and the review goes on", "[workflow]") {
  sim::Scene scene = with_accelerometer(up_in_g);
  scene.bike.front->sprung_accel->is_up = false;  // the bike file that is written says up
  const sim::Truth truth = sim::simulate(scene);
  const test::ScratchFolder folder;
  const auto review = test::log_and_review(scene, truth, folder.path());
  REQUIRE(review.ends[0].apparent);
  CHECK_THAT(review.ends[0].apparent->problem, Contains("points down"));
  const auto named = [](const std::string& note) {
    return note.find("fork from the ride alone") != std::string::npos;
  };
  CHECK(std::any_of(review.notes.begin(), review.notes.end(), named));
  CHECK(review.ends[0].riding_s > 60.0);
}

TEST_CASE("the accelerometer changes no other figure of the review", "[workflow]") {
  sim::Scene scene = with_accelerometer(up_in_g);
  scene.logger.sprung_accel.range_g = 64.0;
  sim::Scene plain = scene;
  plain.bike = test::demo_scene("practice-run/scene.toml").bike;
  const sim::Truth truth = sim::simulate(scene);
  const test::ScratchFolder one, two;
  const auto with = test::log_and_review(scene, truth, one.path());
  const auto without = test::log_and_review(plain, truth, two.path());
  CHECK(!without.ends[0].apparent);
  REQUIRE(with.ends.size() == without.ends.size());
  for (std::size_t i = 0; i < with.ends.size(); ++i) {
    CHECK(with.ends[i].riding_s == without.ends[i].riding_s);
    CHECK(with.ends[i].travel.mean_m == without.ends[i].travel.mean_m);
    CHECK(with.ends[i].bands.rebound.high_s == without.ends[i].bands.rebound.high_s);
  }
  std::string missing;
  for (const std::string& sentence : without.missing) missing += sentence;
  CHECK_THAT(missing, Contains("front.sprung_accel") && Contains("above the fork"));
}
