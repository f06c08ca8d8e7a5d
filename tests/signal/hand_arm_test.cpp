#include "clickwise/signal/hand_arm.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>

using namespace clickwise;

// ISO 5349-1:2001 table A.2 at the true band centres 10^(n/10) Hz, n = -1 ... 36 (check-values 6a).
TEST_CASE("the hand-arm weights are those of the standard's table", "[signal][hand_arm]") {
  const std::vector<double> table{
      .01586, .02514, .03985, .06314,  .09992, .1576,   .2461,    .3754,   .5450,  .7272,
      .8731,  .9514,  .9576,  .8958,   .7820,  .6471,   .5192,    .4111,   .3244,  .2560,
      .2024,  .1602,  .1270,  .1007,   .07988, .06338,  .05026,   .03980,  .03137, .02447,
      .01862, .01346, .00894, .005359, .00295, .001544, .0007878, .0003978};
  for (std::size_t k = 0; k < table.size(); ++k) {
    const double frequency_hz = std::pow(10.0, 0.1 * (static_cast<double>(k) - 1.0));
    CAPTURE(frequency_hz);
    CHECK(signal::hand_arm_weight(frequency_hz) == Approx(table[k]).epsilon(1e-3));
  }
  // ISO 8041-1:2017 table 1: at 500 rad/s (check-values 6b).
  CHECK(signal::hand_arm_weight(500.0 / (2.0 * std::numbers::pi)) ==
        Approx(0.2020).epsilon(1.5e-3));
}

TEST_CASE("a sine's weighted rms is its weight over root two", "[signal][hand_arm]") {
  const double rate_hz = 1000.0;
  for (const double frequency_hz : {10.0, 16.0, 80.0}) {
    std::vector<double> sine;
    for (int i = 0; i < 20000; ++i)
      sine.push_back(3.0 * std::sin(2.0 * std::numbers::pi * frequency_hz * i / rate_hz));
    const double rms = signal::hand_arm_rms_m_s2({sine}, rate_hz);
    CHECK(rms ==
          Approx(3.0 / std::numbers::sqrt2 * signal::hand_arm_weight(frequency_hz)).epsilon(2e-3));
  }
  CHECK(signal::hand_arm_rms_m_s2({std::vector<double>(100, 1.0)}, rate_hz) == 0.0);
}

// ISO 5349-2:2001 examples E.2.1 and E.3 (check-values 6c, 6d); A(8) inverted (6f).
TEST_CASE("daily exposure follows the standard's worked examples", "[signal][hand_arm]") {
  constexpr double hour_s = 3600.0;
  CHECK(signal::daily_exposure_m_s2(7.4, 2.5 * hour_s) == Approx(4.137).margin(0.001));
  const double together = std::hypot(signal::daily_exposure_m_s2(4.6, 2.0 * hour_s),
                                     signal::daily_exposure_m_s2(6.0, 1.0 * hour_s),
                                     signal::daily_exposure_m_s2(3.6, 2.0 * hour_s));
  CHECK(together == Approx(3.6097).margin(1e-4));
  CHECK(signal::daily_exposure_m_s2(5.0, 2.0 * hour_s) == Approx(2.5));
  CHECK(signal::daily_exposure_m_s2(5.0, 8.0 * hour_s) == Approx(5.0));
}
