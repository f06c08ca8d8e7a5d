// IMU pairs from a written log to velocity, against rides whose truth is known. Limits: those the
// project promises (docs/accuracy.md has the measured figures).
#include "support/imu_ride.hpp"

#include <catch2/catch.hpp>
#include <iostream>

using namespace clickwise;
using namespace clickwise::test;

namespace {

const std::string fork_alone = "kind = \"imu_pair\"\n" + fork_units;
const std::string link_alone = "kind = \"imu_pair\"\n" + link_units;

}  // namespace

TEST_CASE("a fork with an IMU pair alone has its velocity within 9 % of its rms",
          "[workflow][imu][slow]") {
  for (const char* name :
       {"practice-run/scene.toml", "bottom-out-count/scene.toml", "two-setups/scene-a.toml"}) {
    CAPTURE(name);
    const sim::Scene scene = imu_scene(name, fork_alone);
    const sim::Truth truth = sim::simulate(scene);
    const workflow::Ride ride = log_and_load(scene, truth);
    const workflow::RideEnd& fork = ride.ends[0];
    const MotionErrors errors =
        motion_errors(fork, *truth.front, truth.rate_hz, scene.speed.stand_before_s);
    std::cout << name << " fork " << 100 * errors.velocity_share << " share "
              << 100 * errors.worst_share_error << " in1 " << errors.within_one_sigma << " in2 "
              << errors.within_two_sigma << "\n";
    for (const auto& note : ride.notes) std::cout << "   " << note << "\n";
    CHECK(errors.velocity_share < 0.09);
    CHECK(errors.worst_share_error < 0.002);
    CHECK_FALSE(fork.motion.travel_known);
    CHECK(ride.log.faults.count(run::FaultKind::saturated) > 0);
  }
}

TEST_CASE("a linkage with two gyros has its velocity within 1.5 % of its rms",
          "[workflow][imu][slow]") {
  const sim::Scene scene = imu_scene("practice-run/scene.toml", "", link_alone);
  const sim::Truth truth = sim::simulate(scene);
  const workflow::Ride ride = log_and_load(scene, truth);
  const MotionErrors errors =
      motion_errors(ride.ends[1], *truth.rear, truth.rate_hz, scene.speed.stand_before_s);
  std::cout << "link " << 100 * errors.velocity_share << " share "
            << 100 * errors.worst_share_error << " in1 " << errors.within_one_sigma << " in2 "
            << errors.within_two_sigma << "\n";
  for (const auto& note : ride.notes) std::cout << "   " << note << "\n";
  CHECK(errors.velocity_share < 0.015);
}
