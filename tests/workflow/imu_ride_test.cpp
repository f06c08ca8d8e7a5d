// IMU pairs from a written log to velocity, against rides whose truth is known. Limits: those the
// project promises (docs/accuracy.md has the measured figures).
#include <catch2/catch.hpp>

#include "clickwise/core/errors.hpp"
#include "support/imu_ride.hpp"

using namespace clickwise;
using namespace clickwise::test;
using Catch::Matchers::Contains;

namespace {

const std::string fork_alone = "kind = \"imu_pair\"\n" + fork_units;
const std::string link_alone = "kind = \"imu_pair\"\n" + link_units;
const std::string fork_fused =
    "kind = \"potentiometer\"\ncolumn = \"fork_adc\"\n"
    "calibration = [[210, 0.0], [3850, 170.0]]\n[front.sensor.imu]\n" +
    fork_units;

sim::Scene short_scene(const std::string& front, const std::string& rear = "") {
  sim::Scene scene = imu_scene("practice-run/scene.toml", front, rear);
  scene.speed.length_m = 420.0;
  scene.speed.stand_before_s = 4.0;
  scene.speed.stand_after_s = 1.0;
  return scene;
}

std::string all(const std::vector<std::string>& notes) {
  std::string text;
  for (const std::string& note : notes) text += note + "\n";
  return text;
}

std::string replaced_all(std::string text, const std::string& from, const std::string& to) {
  for (auto at = text.find(from); at != std::string::npos; at = text.find(from, at + to.size()))
    text.replace(at, from.size(), to);
  return text;
}

// The ride of `scene`'s log, read by a bike file in which the front sensor is another.
workflow::Ride misread(const sim::Scene& scene, const std::string& from, const std::string& to) {
  sim::Scene other = scene;
  const ScratchFolder folder;
  const sim::Truth truth = sim::simulate(scene);
  const WrittenLog written = write_log(scene, truth, folder.path());
  const std::string wrong = replaced_all(scene.bike.text, from, to);
  REQUIRE(wrong != scene.bike.text);
  std::ofstream(written.bike_path, std::ios::binary) << wrong;
  return workflow::load_ride({written.log_path, written.bike_path, {}});
}

}  // namespace

TEST_CASE("a fork with an IMU pair alone has its velocity within 9 % of its rms",
          "[workflow][imu][slow]") {
  double one_sigma = 0.0;
  double two_sigma = 0.0;
  int rides = 0;
  for (const char* name :
       {"practice-run/scene.toml", "bottom-out-count/scene.toml", "two-setups/scene-a.toml"}) {
    for (const unsigned seed : {9u, 10u}) {
      CAPTURE(name, seed);
      sim::Scene scene = imu_scene(name, fork_alone);
      scene.ground.seed = seed;
      scene.logger.seed = seed;
      const sim::Truth truth = sim::simulate(scene);
      const workflow::Ride ride = log_and_load(scene, truth);
      const workflow::RideEnd& fork = ride.ends[0];
      const MotionErrors errors =
          motion_errors(fork, *truth.front, truth.rate_hz, scene.speed.stand_before_s);
      UNSCOPED_INFO(name << ' ' << seed << ": " << errors.velocity_share << ' '
                         << errors.worst_share_error << ' ' << errors.within_one_sigma << ' '
                         << errors.within_two_sigma);
      CHECK(errors.velocity_share < 0.09);
      CHECK(errors.worst_share_error < 0.002);
      CHECK_FALSE(fork.motion.travel_known);
      CHECK_THAT(fork.motion.travel_withheld, Contains("withheld"));
      CHECK(ride.log.faults.count(run::FaultKind::saturated) > 0);
      one_sigma += errors.within_one_sigma;
      two_sigma += errors.within_two_sigma;
      ++rides;
    }
  }
  // The aim is 0.08: sigma is too careful by a little (docs/accuracy.md).
  CHECK(one_sigma / rides == Approx(0.68).margin(0.12));
  CHECK(two_sigma / rides == Approx(0.95).margin(0.03));
}

TEST_CASE("a linkage with two gyros has its velocity within 1.5 % of its rms",
          "[workflow][imu][slow]") {
  const sim::Scene scene = imu_scene("practice-run/scene.toml", "", link_alone);
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = log_and_load(scene, truth);
  const MotionErrors errors =
      motion_errors(ride.ends[1], *truth.rear, truth.rate_hz, scene.speed.stand_before_s);
  CHECK(errors.velocity_share < 0.015);
  CHECK(errors.worst_share_error < 0.001);
}

TEST_CASE("a review of an end whose travel is withheld keeps its bands and counts no bottom-out",
          "[workflow][imu]") {
  const sim::Scene scene = short_scene(fork_alone);
  const ScratchFolder folder;
  const workflow::Review review = log_and_review(scene, sim::simulate(scene), folder.path());
  const workflow::EndReview& fork = review.ends[0];
  CHECK(fork.source == run::Source::imu_pair);
  CHECK(fork.bands.compression.high_s > 0.0);
  CHECK_FALSE(fork.travel_withheld.empty());
  CHECK(std::isnan(fork.travel.mean_m));
  CHECK(fork.bottom_outs.empty());
  CHECK_FALSE(review.front_rear);
}

TEST_CASE("a bike file that contradicts its units is named and the end left out",
          "[workflow][imu]") {
  const sim::Scene scene = short_scene(fork_alone);
  struct Slip {
    const char *from, *to, *says;
  };
  for (const Slip& slip :
       {Slip{"axis = [0, 0, 1]", "axis = [0, 0, -1]", "axis is reversed"},
        Slip{"accel_unit = \"g\"", "accel_unit = \"m/s2\"", "accel_unit = \"g\""},
        Slip{"gyro_unit = \"deg/s\"", "gyro_unit = \"rad/s\"", "gyro_unit = \"deg/s\""}}) {
    CAPTURE(slip.to);
    const workflow::Ride ride = misread(scene, slip.from, slip.to);
    CHECK_THAT(all(ride.notes), Contains("the IMU pair is left out") && Contains(slip.says));
    CHECK(ride.ends[0].riding_s == 0.0);
    CHECK(ride.ends[1].riding_s > 0.0);
  }
}

TEST_CASE("swapped units are named", "[workflow][imu]") {
  const workflow::Ride ride =
      misread(short_scene(fork_alone),
              "upper = { accel = [\"u_ax\", \"u_ay\", \"u_az\"], gyro = "
              "[\"u_gx\", \"u_gy\", \"u_gz\"] }\nlower = { accel = [\"l_ax\", \"l_ay\", \"l_az\"], "
              "gyro = [\"l_gx\", \"l_gy\", \"l_gz\"] }",
              "lower = { accel = [\"u_ax\", \"u_ay\", \"u_az\"], gyro = "
              "[\"u_gx\", \"u_gy\", \"u_gz\"] }\nupper = { accel = [\"l_ax\", \"l_ay\", \"l_az\"], "
              "gyro = [\"l_gx\", \"l_gy\", \"l_gz\"] }");
  CHECK_THAT(all(ride.notes), Contains("exchange upper and lower"));
  CHECK(ride.ends[0].riding_s == 0.0);
}

TEST_CASE("a swing axis turned round is named", "[workflow][imu]") {
  const workflow::Ride ride =
      misread(short_scene("", link_alone), "swing_axis = [0, 1, 0]", "swing_axis = [0, -1, 0]");
  CHECK_THAT(all(ride.notes), Contains("swing axis is reversed"));
}

TEST_CASE("a unit that loses its plug is masked and counted", "[workflow][imu]") {
  sim::Scene scene = short_scene(fork_alone);
  for (const char* column : {"l_ax", "l_ay", "l_az", "l_gx", "l_gy", "l_gz"})
    scene.logger.faults.push_back({run::FaultKind::missing, 20.0, 5.0, column});
  const workflow::Ride ride = log_and_load(scene, sim::simulate(scene));
  CHECK(ride.log.faults.count(run::FaultKind::missing) > 0);
  for (std::size_t i = 20100; i < 24900; ++i) REQUIRE_FALSE(ride.ends[0].motion.valid[i]);
}

TEST_CASE("clocks that drift apart by 200 ppm are named and taken out", "[workflow][imu][slow]") {
  sim::Scene scene = imu_scene("practice-run/scene.toml", fork_alone);
  scene.logger.imu.lower_drift_ppm = 200.0;
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = log_and_load(scene, truth);
  CHECK_THAT(all(ride.notes), Contains("ppm") && Contains("taken out by the gyros"));
  const MotionErrors errors =
      motion_errors(ride.ends[0], *truth.front, truth.rate_hz, scene.speed.stand_before_s);
  CHECK(errors.velocity_share < 0.09);
}

TEST_CASE("units that come late are put beside their potentiometer", "[workflow][imu]") {
  sim::Scene scene = short_scene(fork_fused);
  scene.logger.imu.lag_ms = 10.0;
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = log_and_load(scene, truth);
  CHECK_THAT(all(ride.notes), Contains("ms behind the potentiometer; taken out"));
  const MotionErrors errors =
      motion_errors(ride.ends[0], *truth.front, truth.rate_hz, scene.speed.stand_before_s);
  CHECK(ride.ends[0].motion.travel_known);
  CHECK(errors.velocity_share < 0.03);
}

TEST_CASE("a potentiometer that disagrees with its units in sign or gain is named",
          "[workflow][imu]") {
  const sim::Scene scene = short_scene(fork_fused);
  CHECK_THAT(
      all(misread(scene, "[[210, 0.0], [3850, 170.0]]", "[[210, 170.0], [3850, 0.0]]").notes),
      Contains("move against each other"));
  CHECK_THAT(
      all(misread(scene, "[[210, 0.0], [3850, 170.0]]", "[[210, 0.0], [3850, 140.0]]").notes),
      Contains("times as far as the potentiometer"));
}

TEST_CASE("units at 200 Hz beside a potentiometer at 1 kHz are laid on one base",
          "[workflow][imu]") {
  sim::Scene scene = short_scene(fork_fused);
  scene.logger.imu.rate_hz = 200.0;
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = log_and_load(scene, truth);
  const MotionErrors errors =
      motion_errors(ride.ends[0], *truth.front, truth.rate_hz, scene.speed.stand_before_s);
  CHECK(errors.velocity_share < 0.10);
}
