#include "clickwise/signal/lag.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

using namespace clickwise;

namespace {

// Slow noise as a function of time, the same at every rate.
std::vector<double> story(std::size_t n, double later_samples, double gain) {
  std::vector<double> out(n);
  for (std::size_t i = 0; i < n; ++i) {
    const double t = static_cast<double>(i) - later_samples;
    out[i] =
        gain * (std::sin(0.05 * t) + 0.7 * std::sin(0.173 * t + 1.0) + 0.5 * std::sin(0.31 * t));
  }
  return out;
}

}  // namespace

TEST_CASE("a lag between samples, the gain and the sign are found", "[signal][lag]") {
  const auto early = story(4000, 0.0, 1.0);
  for (const double lag : {0.0, 7.0, 12.3, -5.6}) {
    for (const double gain : {1.0, -2.0}) {
      CAPTURE(lag, gain);
      const auto late = story(4000, lag, gain);
      const signal::Lag found = signal::find_lag({early}, {late}, 40);
      CHECK(found.samples == Approx(lag).margin(0.05));
      CHECK(found.gain == Approx(gain).epsilon(0.01));
      CHECK(found.correlation == Approx(gain > 0.0 ? 1.0 : -1.0).margin(0.01));
    }
  }
}

TEST_CASE("a channel without movement has no lag", "[signal][lag]") {
  const std::vector<double> still(500, 3.0);
  const auto moving = story(500, 0.0, 1.0);
  const signal::Lag found = signal::find_lag({still}, {moving}, 20);
  CHECK(found.samples == 0.0);
  CHECK(found.correlation == 0.0);
}

TEST_CASE("missing readings do not move the lag", "[signal][lag]") {
  auto early = story(4000, 0.0, 1.0);
  const auto late = story(4000, 9.0, 1.0);
  for (std::size_t i = 1000; i < 1400; ++i) early[i] = NAN;
  CHECK(signal::find_lag({early}, {late}, 40).samples == Approx(9.0).margin(0.2));
}
