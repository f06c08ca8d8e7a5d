#include "clickwise/motion/potentiometer.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <chrono>
#include <cmath>
#include <random>
#include <stdexcept>
#include <vector>

#include "motion/logged_ride.hpp"

namespace motion = clickwise::motion;
namespace run = clickwise::run;
using namespace test_support;

namespace {

struct Errors {
  double relative_rms = 0.0;  // of the true velocity's rms
  double worst_share_points =
      0.0;               // high-speed share of time, worst split and direction, in percent
  double covered = 0.0;  // share of samples within two sigma
};

// Over the valid samples, against the ride itself.
Errors errors_of(const run::Motion& found, const WaveRide& ride) {
  std::vector<double> measured, truth;
  double error = 0.0, power = 0.0, inside = 0.0;
  for (std::size_t i = 0; i < found.time.samples; ++i) {
    if (found.valid[i] == 0) continue;
    measured.push_back(found.velocity_m_s[i]);
    truth.push_back(ride.velocity_m_s(found.time.at(i)));
    const double e = measured.back() - truth.back();
    error += e * e;
    power += truth.back() * truth.back();
    inside += std::abs(e) <= 2.0 * found.velocity_sigma_m_s[i];
  }
  const auto count = static_cast<double>(truth.size());
  Errors errors{std::sqrt(error / power), 0.0, inside / count};
  for (double split = 0.3; split <= 1.5; split += 0.1) {
    for (const double sign : {1.0, -1.0}) {
      const auto high = [&](double v) { return sign * v > split; };
      const auto difference =
          std::ranges::count_if(measured, high) - std::ranges::count_if(truth, high);
      errors.worst_share_points = std::max(
          errors.worst_share_points, 100.0 * std::abs(static_cast<double>(difference)) / count);
    }
  }
  return errors;
}

std::size_t valid_samples(const run::Motion& motion) {
  return static_cast<std::size_t>(std::ranges::count(motion.valid, 1));
}

motion::PotentiometerMotion fork_motion(const run::Recording& recording,
                                        const motion::MotionOptions& options = {}) {
  return motion::from_potentiometer(recording, 0, larch_front(), options);
}

}  // namespace

// The limits are the method's aims: what a smoother that knew the truth would reach, with room for
// the ride (docs/method/motion.md).
TEST_CASE("velocity and speed shares are those of the ride", "[motion]") {
  const auto seed = GENERATE(7u, 17u, 27u);
  CAPTURE(seed);
  const double duration_s = 120.0;
  const auto ride = rough_ride(duration_s, seed);
  SECTION("1 kHz, 0.6 counts of noise") {
    const auto result = fork_motion(
        logged(ride, ride, duration_s, {.rate_hz = 1000.0, .noise_counts = 0.6, .seed = seed}));
    const Errors errors = errors_of(result.motion, ride);
    INFO(errors.relative_rms << " " << errors.worst_share_points << " " << errors.covered);
    CHECK(errors.relative_rms < 0.020);
    CHECK(errors.worst_share_points < 0.10);
    CHECK(errors.covered > 0.85);
    CHECK(result.faults.empty());
    CHECK(valid_samples(result.motion) == result.motion.time.samples);
  }
  SECTION("200 Hz, 2.5 counts of noise") {
    const auto result = fork_motion(
        logged(ride, ride, duration_s, {.rate_hz = 200.0, .noise_counts = 2.5, .seed = seed}));
    const Errors errors = errors_of(result.motion, ride);
    INFO(errors.relative_rms << " " << errors.worst_share_points << " " << errors.covered);
    CHECK(errors.relative_rms < 0.060);
    CHECK(errors.worst_share_points < 0.20);
    CHECK(errors.covered > 0.85);
    CHECK(result.faults.empty());
  }
}

TEST_CASE("jitter of 0.12 of an interval costs little when the stamps are used", "[motion]") {
  const auto ride = rough_ride(30.0, 5);
  const auto even = fork_motion(logged(ride, ride, 30.0, {.rate_hz = 500.0}));
  const auto jittered = fork_motion(logged(ride, ride, 30.0, {.rate_hz = 500.0, .jitter = 0.12}));
  // Method section 3: harmless up to 0.12 of a period; believed unread it would add
  // v' dt ~ 20 m/s2 x 0.07 x 2 ms and more on hits.
  CHECK(errors_of(jittered.motion, ride).relative_rms <
        1.25 * errors_of(even.motion, ride).relative_rms);
}

TEST_CASE("the velocity noise is the true error while the end rests", "[motion]") {
  const auto rate_hz = GENERATE(200.0, 1000.0);
  const auto noise_counts = GENERATE(0.6, 2.5);
  CAPTURE(rate_hz, noise_counts);
  // A ride of 30 s, then 30 s of rest in which the error is looked at.
  auto ride = rough_ride(30.0, 3);
  auto recording = logged(ride, ride, 60.0, {.rate_hz = rate_hz, .noise_counts = noise_counts});
  std::mt19937 generator(9);
  std::normal_distribution<double> normal(0.0, noise_counts);
  const double rest = to_counts(0.0451234);
  const auto n = recording.t_s.size();
  for (std::size_t i = n / 2; i < n; ++i)
    recording.channels[0].readings[i] = std::round(rest + normal(generator));
  const auto result = fork_motion(recording);
  double squares = 0.0;
  std::size_t count = 0;
  for (std::size_t i = n / 2 + n / 20; i + n / 50 < n; ++i, ++count)
    squares += std::pow(result.motion.velocity_m_s[i], 2);
  const double true_error = std::sqrt(squares / static_cast<double>(count));
  CHECK(result.motion.velocity_noise_m_s == Approx(true_error).epsilon(0.25));
}

TEST_CASE("a gap stays a gap", "[motion]") {
  const auto ride = rough_ride(20.0, 5);
  auto recording = logged(ride, ride, 20.0, {.rate_hz = 1000.0});
  cut_gap(recording, 8000, 12000);
  const auto result = fork_motion(recording);
  CHECK(result.motion.time.samples == 20000);
  CHECK(valid_samples(result.motion) == 16000);
  CHECK(std::count(result.motion.valid.begin() + 8000, result.motion.valid.begin() + 12000, 0) ==
        4000);
  CHECK(errors_of(result.motion, ride).relative_rms < 0.025);
}

TEST_CASE("a sensor unplugged for half the ride is masked, counted, and in no figure", "[motion]") {
  const auto ride = rough_ride(30.0, 5);
  auto recording = logged(ride, ride, 30.0, {.rate_hz = 1000.0});
  for (std::size_t i = 15000; i < 30000; ++i) recording.channels[0].readings[i] = 4095.0;
  const auto result = fork_motion(recording);
  CHECK(result.faults.count(run::FaultKind::saturated) == 1);
  CHECK(result.faults.faults()[0].seconds == Approx(15.0).margin(0.01));
  CHECK(valid_samples(result.motion) == Approx(15000).margin(3));
  for (std::size_t i = 15000; i < 30000; ++i) REQUIRE(result.motion.valid[i] == 0);
  CHECK(errors_of(result.motion, ride).relative_rms < 0.020);
  const auto rear = motion::from_potentiometer(recording, 1, larch_front());
  CHECK(rear.faults.empty());
  CHECK(valid_samples(rear.motion) == 30000);
}

TEST_CASE("spikes are bridged for the smoother and not counted", "[motion]") {
  const auto ride = rough_ride(20.0, 5);
  auto recording = logged(ride, ride, 20.0, {.rate_hz = 1000.0});
  for (const std::size_t i : {3000u, 7001u, 7002u, 15555u})
    recording.channels[0].readings[i] = 3900.0;
  const auto result = fork_motion(recording);
  CHECK(result.faults.count(run::FaultKind::spike) == 3);
  CHECK(valid_samples(result.motion) == 20000 - 4);
  for (const std::size_t i : {3000u, 7001u, 7002u, 15555u}) CHECK(result.motion.valid[i] == 0);
  CHECK(errors_of(result.motion, ride).relative_rms < 0.020);
}

TEST_CASE("empty cells: a few are bridged, more split the stretch", "[motion]") {
  const auto ride = rough_ride(10.0, 5);
  auto recording = logged(ride, ride, 10.0, {.rate_hz = 1000.0});
  for (const std::size_t from : {2000u, 6000u})
    for (std::size_t i = from; i < from + (from == 2000u ? 3u : 40u); ++i)
      recording.channels[0].readings[i] = std::nan("");
  const auto result = fork_motion(recording);
  CHECK(valid_samples(result.motion) == 10000 - 43);
  CHECK(std::isfinite(result.motion.velocity_m_s[2001]));
  CHECK(std::isnan(result.motion.velocity_m_s[6020]));
}

TEST_CASE("travel beyond the stroke is kept, and said", "[motion]") {
  auto ride = rough_ride(20.0, 5);
  ride.hits.push_back({10.0, 0.15, 0.150});
  const auto recording = logged(ride, ride, 20.0, {.rate_hz = 1000.0});
  auto end = larch_front();
  end.stroke_m = 0.140;
  const auto result = motion::from_potentiometer(recording, 0, end);
  CHECK(result.excess.beyond_stroke.most_m > 0.02);
  CHECK(result.excess.beyond_stroke.seconds > 0.01);
  REQUIRE(result.notes.size() == 1);
  CHECK(result.notes[0].find("beyond the stroke") != std::string::npos);
  CHECK(*std::ranges::max_element(result.motion.travel_m) > 0.16);
}

TEST_CASE("a calibration that falls with the reading gives the same motion", "[motion]") {
  const auto ride = rough_ride(10.0, 5);
  auto recording = logged(ride, ride, 10.0, {.rate_hz = 1000.0});
  const auto rising = fork_motion(recording);
  for (double& reading : recording.channels[0].readings) reading = 4060.0 - reading;
  auto end = larch_front();
  end.sensor.travel_m = clickwise::core::Polyline({210.0, 3850.0}, {0.170, 0.0});
  const auto falling = motion::from_potentiometer(recording, 0, end);
  for (std::size_t i = 0; i < 10000; i += 97)
    CHECK(falling.motion.velocity_m_s[i] == Approx(rising.motion.velocity_m_s[i]).margin(1e-6));
}

TEST_CASE("nothing usable gives an invalid motion and a note, not a crash", "[motion]") {
  const auto length = GENERATE(2u, 3u, 5u, 2000u);
  CAPTURE(length);
  auto recording = logged({}, {}, length / 1000.0 + 1e-4, {.rate_hz = 1000.0});
  for (double& reading : recording.channels[0].readings) reading = std::nan("");
  const auto result = fork_motion(recording);
  CHECK(valid_samples(result.motion) == 0);
  CHECK(result.motion.velocity_m_s.size() == length);
  CHECK(result.notes.size() == 1);
  CHECK_THROWS_AS(motion::from_potentiometer(recording, 9, larch_front()), std::out_of_range);
}

TEST_CASE("a fixed span is used when it is asked for", "[motion]") {
  const auto ride = rough_ride(10.0, 5);
  const auto recording = logged(ride, ride, 10.0, {.rate_hz = 1000.0});
  motion::MotionOptions options;
  options.smooth_span_s = 0.021;
  const auto fixed = fork_motion(recording, options);
  CHECK(fixed.motion.smoothing != fork_motion(recording).motion.smoothing);
  CHECK(errors_of(fixed.motion, ride).relative_rms < 0.10);
}

TEST_CASE("speed of a ten-minute log", "[.][benchmark]") {
  const auto ride = rough_ride(600.0, 5);
  auto short_ride = ride;
  short_ride.hits.resize(100);
  const auto recording = logged(short_ride, short_ride, 600.0, {.rate_hz = 1000.0});
  const auto start = std::chrono::steady_clock::now();
  const auto faults =
      motion::find_reading_faults(recording, 0, {larch_front().sensor.travel_m, 0.17});
  const std::chrono::duration<double, std::milli> search = std::chrono::steady_clock::now() - start;
  const auto result = fork_motion(recording);
  const std::chrono::duration<double, std::milli> all = std::chrono::steady_clock::now() - start;
  WARN("600,000 samples: faults " << search.count() << " ms, all " << (all - search).count()
                                  << " ms");
  CHECK(valid_samples(result.motion) == 600000);
}
