#include "clickwise/motion/sprung_accel.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using namespace clickwise;

namespace {

// 1 kHz; a travel channel, then the accelerometer.
run::Recording recording_of(std::vector<double> readings) {
  run::Recording recording;
  for (std::size_t i = 0; i < readings.size(); ++i)
    recording.t_s.push_back(1e-3 * static_cast<double>(i));
  recording.stretches = {{0, readings.size()}};
  recording.interval_s = 1e-3;
  recording.channels = {{"fork_adc", std::vector<double>(readings.size(), 500.0)},
                        {"fork_az", std::move(readings)}};
  return recording;
}

motion::SprungAccelMotion taken(run::Recording& recording, bool in_g, bool is_up) {
  const auto clock = motion::uniform_clock(recording);
  return motion::take_sprung_accel(recording, {{"fork_az", 0}, in_g, is_up}, clock);
}

}  // namespace

TEST_CASE("readings become felt acceleration by unit and axis", "[motion]") {
  for (const double sign : {1.0, -1.0}) {
    auto recording = recording_of({sign * 1.0, sign * 2.5, sign * -0.5, sign * 1.0});
    const auto motion = taken(recording, true, sign > 0.0);
    REQUIRE(motion.felt_m_s2.size() == 4);
    CHECK(motion.felt_m_s2[1] == Approx(2.5 * 9.80665));
    CHECK(motion.felt_m_s2[2] == Approx(-0.5 * 9.80665));
    CHECK(motion.faults.empty());
  }
}

TEST_CASE("the accelerometer leaves the recording to the travel sensors", "[motion]") {
  auto recording = recording_of({1.0, 2.0, 1.5});
  taken(recording, false, true);
  REQUIRE(recording.channels.size() == 1);
  CHECK(recording.channels[0].name == "fork_adc");
  recording.channels.clear();
  CHECK_THROWS_AS(taken(recording, false, true), std::out_of_range);
}

TEST_CASE("a reading held at the end of its range is masked with its neighbours and counted",
          "[motion]") {
  auto recording = recording_of({1, 1, 5, 16, 16, 16, 16, 9, 1, 2, 1, 0.5, -16, -16, -16, 2, 1, 1});
  const auto motion = taken(recording, true, true);
  for (const std::size_t i : {2u, 3u, 6u, 7u, 11u, 12u, 14u, 15u}) CHECK(std::isnan(motion.felt_m_s2[i]));
  for (const std::size_t i : {0u, 9u, 17u}) CHECK(std::isfinite(motion.felt_m_s2[i]));
  REQUIRE(motion.faults.faults().size() == 1);
  const run::Fault& fault = motion.faults.faults()[0];
  CHECK(fault.kind == run::FaultKind::saturated);
  CHECK(fault.channel == "fork_az");
  CHECK(fault.count == 2);
  CHECK(fault.seconds == Approx(11e-3));
}

TEST_CASE("a peak of two samples is a hit, not the end of the range", "[motion]") {
  auto recording = recording_of({1, 5, 16, 16, 3, 1, 0.2, 1});
  CHECK(taken(recording, true, true).faults.empty());
}

TEST_CASE("a channel that never changes is dead", "[motion]") {
  auto recording = recording_of(std::vector<double>(50, 1.0));
  const auto motion = taken(recording, true, true);
  CHECK(motion.faults.count(run::FaultKind::stuck) == 1);
  for (const double felt : motion.felt_m_s2) CHECK(std::isnan(felt));
}
