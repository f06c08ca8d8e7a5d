#include "clickwise/motion/reading_faults.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>
#include <stdexcept>
#include <vector>

#include "motion/logged_ride.hpp"

namespace motion = clickwise::motion;
namespace run = clickwise::run;
using run::FaultKind;
using namespace test_support;

namespace {

motion::SensorRange larch_range() {
  return {larch_front().sensor.travel_m, 0.170};
}

run::Recording ride_at(double rate_hz, double noise_counts, double duration_s = 20.0) {
  return logged(rough_ride(duration_s, 7), rough_ride(duration_s, 70), duration_s,
                {.rate_hz = rate_hz, .noise_counts = noise_counts});
}

std::vector<double>& fork_of(run::Recording& recording) {
  return recording.channels[0].readings;
}

motion::ReadingFaults search(const run::Recording& recording) {
  return motion::find_reading_faults(recording, 0, larch_range());
}

// Masked samples outside [begin, end), and usable ones inside it.
std::size_t wrongly_masked(const motion::ReadingFaults& found, std::size_t begin, std::size_t end) {
  std::size_t wrong = 0;
  for (std::size_t i = 0; i < found.usable.size(); ++i)
    wrong += (found.usable[i] == 0) != (i >= begin && i < end);
  return wrong;
}

}  // namespace

TEST_CASE("a clean ride raises no fault", "[motion]") {
  const auto rate_hz = GENERATE(100.0, 200.0, 500.0, 1000.0, 3000.0);
  const auto noise_counts = GENERATE(0.0, 0.6, 2.5);
  CAPTURE(rate_hz, noise_counts);
  const auto recording = ride_at(rate_hz, noise_counts);
  const auto found = search(recording);
  CHECK(found.faults.empty());
  CHECK(wrongly_masked(found, 0, 0) == 0);
}

TEST_CASE("a fork held at its stroke by the ground is not saturated, nor stuck", "[motion]") {
  auto recording = ride_at(1000.0, 0.0);
  for (std::size_t i = 5000; i < 5300; ++i) fork_of(recording)[i] = 3850.0;
  CHECK(search(recording).faults.empty());
}

TEST_CASE("a fork that hangs at full extension for three seconds is not stuck", "[motion]") {
  auto recording = ride_at(1000.0, 0.0);
  for (std::size_t i = 5000; i < 8000; ++i) fork_of(recording)[i] = 215.0;
  CHECK(search(recording).faults.count(FaultKind::stuck) == 0);
}

TEST_CASE("a constant reading is stuck only while another channel moves", "[motion]") {
  auto recording = ride_at(1000.0, 0.6);
  for (std::size_t i = 5000; i < 9000; ++i) fork_of(recording)[i] = 1500.0;
  SECTION("the shock moves") {
    const auto found = search(recording);
    CHECK(found.faults.count(FaultKind::stuck) == 1);
    CHECK(wrongly_masked(found, 4999, 9001) <= 1);
    REQUIRE(found.faults.faults().size() == 1);
    CHECK(found.faults.faults()[0].seconds == Approx(4.0).margin(0.005));
    CHECK(found.faults.faults()[0].channel == "fork_adc");
  }
  SECTION("the shock stands too: the bike stands") {
    for (std::size_t i = 4900; i < 9100; ++i) recording.channels[1].readings[i] = 900.0;
    CHECK(search(recording).faults.empty());
  }
  SECTION("both ends stand, a third channel moves: both are stuck") {
    for (std::size_t i = 4900; i < 9100; ++i) recording.channels[1].readings[i] = 900.0;
    recording.channels.push_back({"wheel_kmh", {}});
    for (std::size_t i = 0; i < recording.t_s.size(); ++i)
      recording.channels[2].readings.push_back(20.0 + 10.0 * std::sin(recording.t_s[i]));
    CHECK(search(recording).faults.count(FaultKind::stuck) == 1);
    CHECK(motion::find_reading_faults(recording, 1, larch_range()).faults.count(FaultKind::stuck) ==
          1);
  }
}

TEST_CASE("a noisy channel that is constant for half a second is stuck", "[motion]") {
  auto recording = ride_at(1000.0, 0.6);
  for (std::size_t i = 9000; i < 9500; ++i) fork_of(recording)[i] = fork_of(recording)[9000];
  const auto found = search(recording);
  CHECK(found.faults.count(FaultKind::stuck) == 1);
  CHECK(wrongly_masked(found, 8999, 9501) <= 1);
}

TEST_CASE("an input at the converter's end outside the stroke is saturated", "[motion]") {
  const auto rail = GENERATE(0.0, 4095.0);
  const auto length = GENERATE(4u, 40u, 10000u);
  CAPTURE(rail, length);
  auto recording = ride_at(1000.0, 0.6);
  for (std::size_t i = 8000; i < 8000 + length; ++i) fork_of(recording)[i] = rail;
  const auto found = search(recording);
  CHECK(found.faults.count(FaultKind::saturated) == 1);
  CHECK(wrongly_masked(found, 7999, 8001 + length) == 0);
}

TEST_CASE("an input held beyond the stroke, flickering, at no known converter end is saturated",
          "[motion]") {
  auto recording = ride_at(1000.0, 0.6);
  for (std::size_t i = 8000; i < 12000; ++i)
    fork_of(recording)[i] = 4020.0 + (i % 3 == 0 ? 1.0 : 0.0);
  const auto found = search(recording);
  CHECK(found.faults.count(FaultKind::saturated) == 1);
  CHECK(wrongly_masked(found, 7999, 12001) == 0);
}

TEST_CASE("an open input's noise is missing, for as long as it lasts", "[motion]") {
  auto recording = ride_at(1000.0, 0.6);
  std::mt19937 generator(3);
  std::uniform_real_distribution<double> anything(300.0, 3800.0);
  for (std::size_t i = 10000; i < 20000; ++i)
    fork_of(recording)[i] = std::round(anything(generator));
  const auto found = search(recording);
  CHECK(found.faults.count(FaultKind::missing) == 1);
  CHECK(wrongly_masked(found, 10000, 20000) == 0);
}

TEST_CASE("spikes of one to three samples are masked, and nothing else", "[motion]") {
  const auto rate_hz = GENERATE(200.0, 1000.0);
  const auto width = GENERATE(1u, 2u, 3u);
  CAPTURE(rate_hz, width);
  auto recording = ride_at(rate_hz, 0.6);
  const std::size_t step = 331;
  std::size_t planted = 0;
  for (std::size_t i = 200; i + 200 < fork_of(recording).size(); i += step, ++planted)
    for (std::size_t k = 0; k < width; ++k) {
      double& reading = fork_of(recording)[i + k];
      reading += reading < 2000.0 ? 1500.0 : -1500.0;
    }
  const auto found = search(recording);
  std::size_t missed = 0, masked = 0;
  for (std::size_t i = 200, n = 0; n < planted; i += step, ++n)
    for (std::size_t k = 0; k < width; ++k) missed += found.usable[i + k] != 0;
  for (const auto usable : found.usable) masked += usable == 0;
  CHECK(missed == 0);
  CHECK(masked == planted * width);
  CHECK(found.faults.count(FaultKind::spike) == static_cast<long long>(planted));
}

TEST_CASE("an empty cell is not usable and is the reader's to count", "[motion]") {
  auto recording = ride_at(1000.0, 0.6, 5.0);
  fork_of(recording)[1000] = std::numeric_limits<double>::quiet_NaN();
  const auto found = search(recording);
  CHECK(found.usable[1000] == 0);
  CHECK(found.faults.empty());
}

TEST_CASE("a channel of nothing, and one that is not there", "[motion]") {
  auto recording = ride_at(1000.0, 0.6, 1.0);
  for (double& reading : fork_of(recording)) reading = std::numeric_limits<double>::quiet_NaN();
  CHECK(wrongly_masked(search(recording), 0, recording.t_s.size()) == 0);
  CHECK_THROWS_AS(motion::find_reading_faults(recording, 5, larch_range()), std::out_of_range);
  CHECK_THROWS_AS(motion::find_reading_faults(recording, 0, {larch_range().travel_m, 0.0}),
                  std::invalid_argument);
}
