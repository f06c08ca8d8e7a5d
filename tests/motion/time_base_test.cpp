#include "clickwise/motion/time_base.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "motion/logged_ride.hpp"

namespace motion = clickwise::motion;
namespace run = clickwise::run;
using namespace test_support;

TEST_CASE("even stamps fall on the points of the base, through a gap too", "[motion]") {
  auto recording = logged({}, {}, 4.0, {.rate_hz = 1000.0});
  cut_gap(recording, 1000, 2000);
  // After the gap the clock is off by 0.4 of a sample.
  for (std::size_t i = 1000; i < recording.t_s.size(); ++i) recording.t_s[i] += 0.4e-3;
  const auto clock = motion::uniform_clock(recording);
  CHECK(clock.base.samples == 4000);
  CHECK(clock.base.rate_hz == Approx(1000.0));
  CHECK(clock.place[999] == 999.0);
  CHECK(clock.place[1000] == 2000.0);
  CHECK(clock.place.back() == 3999.0);
}

TEST_CASE("stamps rounded more coarsely than they were taken are even", "[motion]") {
  const auto recording = logged({}, {}, 2.0, {.rate_hz = 3000.0, .stamp_step_s = 1e-4});
  const auto clock = motion::uniform_clock(recording);
  for (const std::size_t i : {0u, 1u, 2u, 3001u, 5999u})
    CHECK(clock.place[i] == static_cast<double>(i));
}

TEST_CASE("stamps that jitter are believed", "[motion]") {
  const auto recording = logged({}, {}, 2.0, {.rate_hz = 1000.0, .jitter = 0.12});
  const auto clock = motion::uniform_clock(recording);
  for (std::size_t i = 0; i < clock.place.size(); ++i)
    REQUIRE(clock.place[i] == Approx(recording.t_s[i] * 1000.0).margin(1e-9));
}

TEST_CASE("a stretch at another rate keeps its own time", "[motion]") {
  auto recording = logged({}, {}, 2.0, {.rate_hz = 1000.0});
  for (double& t : recording.t_s) t *= 1.001;
  const auto clock = motion::uniform_clock(recording);
  CHECK(clock.place[1999] == Approx(1999 * 1.001).margin(1e-6));
}

TEST_CASE("a channel on the base is straight between its readings and absent in gaps", "[motion]") {
  auto recording = logged({}, {}, 0.010, {.rate_hz = 1000.0});
  recording.channels.push_back({"wheel_kmh", {0, 1, 2, 3, 4, 5, 6, 7, 8, 9}});
  cut_gap(recording, 4, 6);
  recording.channels[2].readings[1] = std::numeric_limits<double>::quiet_NaN();
  const auto speed = motion::on_base(recording, 2, motion::uniform_clock(recording));
  REQUIRE(speed.size() == 10);
  CHECK(speed[3] == 3.0);
  CHECK(std::isnan(speed[1]));
  CHECK(std::isnan(speed[4]));
  CHECK(std::isnan(speed[5]));
  CHECK(speed[9] == 9.0);
}

TEST_CASE("a log without a stretch of time is an impossible job", "[motion]") {
  run::Recording recording;
  CHECK_THROWS_AS(motion::uniform_clock(recording), clickwise::core::JobError);
  recording = logged({}, {}, 0.002, {.rate_hz = 1000.0});
  recording.interval_s = 0.0;
  CHECK_THROWS_AS(motion::uniform_clock(recording), clickwise::core::JobError);
  recording.interval_s = 1e-3;
  recording.t_s.back() = 1e12;
  CHECK_THROWS_AS(motion::uniform_clock(recording), clickwise::core::JobError);
}
