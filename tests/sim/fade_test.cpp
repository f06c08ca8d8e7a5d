#include <catch2/catch.hpp>

#include "apparent_rides.hpp"

using namespace clickwise;
using namespace clickwise::apparent_rides;

namespace {

sim::Fade fade_of(int number, std::uint64_t set, double seconds,
                  const std::function<double(double)>& scale) {
  const auto course = replay_rides::ride_number(number, set, seconds);
  const auto log = logged(ride(course, scale), course.parts.end.stroke_m, set);
  const auto found = sim::apparent_damper(known(course.parts), log.view());
  CAPTURE(course.name, found.problem);
  REQUIRE(found.fade);
  return *found.fade;
}

// What the scale changed by between the middles of the first and the last window.
double expected(const sim::Fade& fade, double seconds, const std::function<double(double)>& scale) {
  return scale(fade.windows.back().t_s / seconds) / scale(fade.windows.front().t_s / seconds) - 1.0;
}

}  // namespace

// A window's time is the middle of its riding, its share that of its hardest work, anywhere in it:
// half a window of 24 at either end is 0.01 of the change, and the weights within the line as much.
TEST_CASE("a damper that weakens by a quarter is told, and by how much", "[sim][slow]") {
  const auto scale = [](double part) { return 1.0 - 0.25 * part; };
  for (int number = 0; number < 6; ++number) {
    CAPTURE(number);
    const auto fade = fade_of(number, 21, 90.0, scale);
    CHECK(fade.clear);
    CHECK(fade.change.value == Approx(expected(fade, 90.0, scale)).margin(0.02));
    CHECK(fade.change.low < fade.change.value);
    CHECK(fade.change.high < -0.18);
  }
}

TEST_CASE("a damper that stiffens is told with the other sign", "[sim]") {
  const auto fade = fade_of(0, 22, 60.0, [](double part) { return 1.0 + 0.25 * part; });
  CHECK(fade.clear);
  CHECK(fade.change.value == Approx(0.25 * (1.0 - 1.0 / 24.0)).margin(0.02));
}

// The line through a step d in mid-ride rises by 1.5 d over it, from 1 - 0.125 + 0.1875: -0.353.
// Where the hard work lies moves it.
TEST_CASE("a step in the damping is told by the line as about 1.4 times its size", "[sim]") {
  const auto fade = fade_of(5, 24, 60.0, [](double part) { return part < 0.5 ? 1.0 : 0.75; });
  CHECK(fade.clear);
  CHECK(fade.change.value == Approx(-0.353).margin(0.08));
}

// A real change, smaller than what is worth a word.
TEST_CASE("a change of 4 % is measured but not called fade", "[sim]") {
  const auto fade = fade_of(1, 23, 60.0, [](double part) { return 1.0 - 0.04 * part; });
  CHECK(!fade.clear);
  CHECK(fade.change.value == Approx(-0.038).margin(0.02));
}

// A chance of 1 % a ride at the most would give two alarms or more in 24 with 2.4 %.
TEST_CASE("a damper that does not change raises no alarm", "[sim][slow]") {
  int alarms = 0, zero_inside = 0;
  constexpr int rides = 24;
  for (int number = 0; number < rides; ++number) {
    const auto fade = fade_of(number % 12, 30 + static_cast<std::uint64_t>(number / 12), 45.0,
                              [](double) { return 1.0; });
    alarms += fade.clear;
    zero_inside += fade.change.low <= 0.0 && fade.change.high >= 0.0;
  }
  CHECK(alarms <= 1);
  // 90 % of 24 less three deviations (1.5 each).
  CHECK(zero_inside >= 17);
}
