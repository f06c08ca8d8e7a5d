// The whole chain from a written log to velocity, shares and bottom-outs, against rides whose truth
// is known. Limits: those the project promises (docs/accuracy.md has the measured figures).
#include <catch2/catch.hpp>

#include "clickwise/workflow/review.hpp"
#include "support/invented_log.hpp"

using namespace clickwise;

namespace {

sim::Scene clean_scene(const std::string& name, double rate_hz, double noise_counts) {
  sim::Scene scene = test::demo_scene(name);
  scene.logger.rate_hz = rate_hz;
  scene.logger.noise_counts = noise_counts;
  scene.logger.faults.clear();
  return scene;
}

}  // namespace

TEST_CASE("velocity from a clean 1 kHz, 12 bit log is within 2 % of its rms, no filter chosen",
          "[workflow][slow]") {
  const sim::Scene scene = clean_scene("practice-run/scene.toml", 1000.0, 0.6);
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = test::log_and_load(scene, truth);
  REQUIRE(ride.ends.size() == 2);
  CHECK(ride.log.faults.empty());
  for (const workflow::RideEnd& end : ride.ends) {
    CAPTURE(bike::to_string(end.name));
    const test::MotionErrors errors =
        test::motion_errors(end, *truth.end(end.name), truth.rate_hz, scene.speed.stand_before_s);
    CHECK(errors.velocity_share < 0.020);
    CHECK(errors.worst_share_error < 0.001);
    CHECK(errors.rest_error_m_s == Approx(end.motion.velocity_noise_m_s).epsilon(0.25));
    // 68 and 95 % of a normal law; the limits are those of method section 4's sigma.
    CHECK(errors.within_one_sigma == Approx(0.68).margin(0.08));
    CHECK(errors.within_two_sigma == Approx(0.95).margin(0.03));
  }
}

TEST_CASE("velocity from a noisy 200 Hz log is within 6 % of its rms", "[workflow][slow]") {
  const sim::Scene scene = clean_scene("practice-run/scene.toml", 200.0, 2.5);
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = test::log_and_load(scene, truth);
  for (const workflow::RideEnd& end : ride.ends) {
    CAPTURE(bike::to_string(end.name));
    const test::MotionErrors errors =
        test::motion_errors(end, *truth.end(end.name), truth.rate_hz, scene.speed.stand_before_s);
    CHECK(errors.velocity_share < 0.060);
    CHECK(errors.worst_share_error < 0.002);
  }
}

TEST_CASE("bottom-outs are counted exactly and met within 10 % or 60 mm/s", "[workflow][slow]") {
  for (const char* name : {"practice-run/scene.toml", "two-setups/scene-a.toml"}) {
    CAPTURE(name);
    const sim::Scene scene = clean_scene(name, 1000.0, 0.6);
    const sim::Truth truth = sim::simulate(scene);
    const test::ScratchFolder folder;
    const workflow::Review review = test::log_and_review(scene, truth, folder.path());
    for (const workflow::EndReview& end : review.ends) {
      const auto& expected = truth.end(end.name)->bottom_outs;
      REQUIRE(end.bottom_outs.size() == expected.size());
      for (std::size_t i = 0; i < expected.size(); ++i) {
        CAPTURE(expected[i].t_s, expected[i].closing_speed_m_s);
        CHECK(std::abs(end.bottom_outs[i].t_s - expected[i].t_s) < 0.005);
        CHECK(std::abs(end.bottom_outs[i].closing_speed_m_s - expected[i].closing_speed_m_s) <
              std::max(0.060, 0.10 * expected[i].closing_speed_m_s));
      }
    }
  }
}

TEST_CASE("faulted time is in no band, and the rest adds up", "[workflow]") {
  sim::Scene scene = clean_scene("practice-run/scene.toml", 500.0, 0.6);
  scene.logger.faults = {{run::FaultKind::stuck, 40.0, 30.0, "fork_adc"},
                         {run::FaultKind::gap, 20.0, 2.0, ""},
                         {run::FaultKind::spike, 90.0, 0.0, "shock_adc"}};
  const sim::Truth truth = sim::simulate(scene);
  const test::ScratchFolder folder;
  const workflow::Review review = test::log_and_review(scene, truth, folder.path());
  CHECK(review.log.faults.count(run::FaultKind::stuck) == 1);
  CHECK(review.log.faults.count(run::FaultKind::gap) == 1);
  CHECK(review.log.faults.count(run::FaultKind::spike) >= 1);
  for (const workflow::EndReview& end : review.ends) {
    const bands::VelocityBands& bands = end.bands;
    const double in_bands_s = bands.compression.low_s + bands.compression.high_s +
                              bands.rebound.low_s + bands.rebound.high_s;
    CHECK(in_bands_s == Approx(end.riding_s).margin(1e-6));
    CHECK(end.riding_s <= review.log.riding_s + 1e-6);
  }
  CHECK(review.ends[0].riding_s < review.log.riding_s - 29.0);
  // The gap is 2 s long; standing is told in blocks of a tenth of a second at either end.
  CHECK(review.log.riding_s < truth.progress.ride_end_s - truth.progress.ride_begin_s - 1.8);
}
