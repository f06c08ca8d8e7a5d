#include "clickwise/motion/riding.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>
#include <stdexcept>
#include <vector>

namespace motion = clickwise::motion;
namespace run = clickwise::run;

namespace {

// 100 Hz; moving at +-0.3 m/s outside [rest_from, rest_to) s, sensor noise of 8 mm/s throughout.
run::Motion end_at_rest(double duration_s, double rest_from, double rest_to, unsigned seed = 1) {
  run::Motion end;
  end.time = {0.0, 100.0, static_cast<std::size_t>(duration_s * 100.0)};
  end.velocity_noise_m_s = 8e-3;
  std::mt19937 generator(seed);
  std::normal_distribution<double> noise(0.0, end.velocity_noise_m_s);
  for (std::size_t i = 0; i < end.time.samples; ++i) {
    const double t = end.time.at(i);
    const double v = t >= rest_from && t < rest_to ? 0.0 : 0.3 * std::sin(9.0 * t);
    end.velocity_m_s.push_back(v + noise(generator));
  }
  end.valid.assign(end.time.samples, 1);
  end.travel_m.assign(end.time.samples, 0.05);
  return end;
}

}  // namespace

TEST_CASE("a rest of more than five seconds is standing, a shorter one is riding", "[motion]") {
  const auto long_rest = end_at_rest(60.0, 20.0, 40.0);
  CHECK(motion::riding({&long_rest}).riding_s == Approx(40.0).margin(0.2));
  const auto short_rest = end_at_rest(60.0, 20.0, 24.7);
  CHECK(motion::riding({&short_rest}).riding_s == Approx(60.0).margin(1e-9));
}

TEST_CASE("it is riding while either end moves, or the wheel turns", "[motion]") {
  const auto front = end_at_rest(60.0, 20.0, 40.0), rear = end_at_rest(60.0, 30.0, 50.0, 2);
  CHECK(motion::riding({&front, &rear}).riding_s == Approx(50.0).margin(0.2));
  std::vector<double> speed(front.time.samples, std::numeric_limits<double>::quiet_NaN());
  CHECK(motion::riding({&front}, speed).riding_s == Approx(40.0).margin(0.2));
  for (std::size_t i = 3000; i < 3300; ++i) speed[i] = 4.0;  // 30 to 33 s
  CHECK(motion::riding({&front}, speed).riding_s == Approx(43.0).margin(0.3));
}

TEST_CASE("masked time of one end is riding time of the other", "[motion]") {
  auto front = end_at_rest(20.0, 0.0, 0.0), rear = end_at_rest(20.0, 0.0, 0.0, 2);
  for (std::size_t i = 500; i < 800; ++i) front.valid[i] = 0;
  for (std::size_t i = 700; i < 800; ++i) rear.valid[i] = 0;
  const auto riding = motion::riding({&front, &rear});
  CHECK(riding.riding_s == Approx(19.0).margin(1e-9));
  const auto counted = riding.counted(front);
  CHECK(std::count(counted.begin(), counted.end(), 1) == 1700);
  CHECK(counted[600] == 0);
  CHECK(riding.mask[600] == 1);
  CHECK(riding.mask[750] == 0);
}

TEST_CASE("a gap inside a rest does not end it", "[motion]") {
  auto front = end_at_rest(30.0, 10.0, 18.0);
  for (std::size_t i = 1300; i < 1500; ++i) front.valid[i] = 0;
  CHECK(motion::riding({&front}).riding_s == Approx(22.0).margin(0.2));
}

TEST_CASE("riding needs an end, and one clock", "[motion]") {
  const auto front = end_at_rest(20.0, 0.0, 0.0), rear = end_at_rest(10.0, 0.0, 0.0);
  CHECK_THROWS_AS(motion::riding({}), std::invalid_argument);
  CHECK_THROWS_AS(motion::riding({&front, &rear}), std::invalid_argument);
  const std::vector<double> speed(7, 0.0);
  CHECK_THROWS_AS(motion::riding({&front}, speed), std::invalid_argument);
}
