#include "clickwise/events/airtime.hpp"

#include <catch2/catch.hpp>
#include <stdexcept>
#include <vector>

namespace events = clickwise::events;
namespace run = clickwise::run;

namespace {

using Mask = std::vector<std::uint8_t>;

// 100 Hz for two seconds at 30 mm, and at 2 mm in [from, to).
run::Motion extended_between(std::size_t from, std::size_t to, std::size_t samples = 200) {
  run::Motion motion;
  motion.time = {0.0, 100.0, samples};
  motion.travel_m.assign(samples, 0.030);
  for (std::size_t i = from; i < to; ++i) motion.travel_m[i] = 0.002;
  return motion;
}

}  // namespace

TEST_CASE("airtime is the time when both ends are near full extension", "[events]") {
  const auto front = extended_between(40, 80), rear = extended_between(50, 95);
  const Mask all(200, 1);
  const auto found = events::airtimes({{&front, all}, {&rear, all}});
  REQUIRE(found.size() == 1);
  CHECK(found[0].begin_s == Approx(0.50));
  CHECK(found[0].end_s == Approx(0.80));
}

TEST_CASE("a tenth of a second is airtime, less is not, and a lifted bike is not", "[events]") {
  const Mask all(1000, 1);
  const auto count = [&](std::size_t length) {
    const auto front = extended_between(40, 40 + length, 1000);
    return events::airtimes({{&front, all}}).size();
  };
  CHECK(count(9) == 0);
  CHECK(count(10) == 1);
  CHECK(count(400) == 1);
  CHECK(count(401) == 0);
}

TEST_CASE("airtime that runs to the record's end is counted up to it", "[events]") {
  const auto front = extended_between(180, 200);
  const auto found = events::airtimes({{&front, Mask(200, 1)}});
  REQUIRE(found.size() == 1);
  CHECK(found[0].end_s == Approx(2.0));
}

TEST_CASE("a masked sample of either end closes the stretch", "[events]") {
  const auto front = extended_between(40, 80), rear = extended_between(40, 80);
  const Mask all(200, 1);
  Mask hole = all;
  hole[55] = 0;
  const auto found = events::airtimes({{&front, all}, {&rear, hole}});
  REQUIRE(found.size() == 2);
  CHECK(found[0].end_s == Approx(0.55));
  CHECK(found[1].begin_s == Approx(0.56));
}

TEST_CASE("no end, or ends on different clocks, are refused", "[events]") {
  const auto front = extended_between(40, 80), rear = extended_between(40, 80, 100);
  const Mask all(200, 1), fewer(100, 1);
  CHECK_THROWS_AS(events::airtimes({}), std::invalid_argument);
  CHECK_THROWS_AS(events::airtimes({{&front, all}, {&rear, fewer}}), std::invalid_argument);
}
