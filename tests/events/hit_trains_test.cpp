#include "clickwise/events/hit_trains.hpp"

#include <catch2/catch.hpp>
#include <stdexcept>
#include <vector>

#include "support/ride_of_waves.hpp"

namespace events = clickwise::events;
namespace run = clickwise::run;
using test_support::all_counted;

namespace {

constexpr events::HitTrainOptions larch_fork{.stroke_m = 0.150};

// Saw teeth at 100 Hz: each hit rises 30 mm in 5 samples and recovers all but `climb_mm` in 10.
run::Motion saw(int hits, double climb_mm, std::size_t rest_samples = 0) {
  run::Motion motion;
  std::vector<double>& x = motion.travel_m;
  double start = 20.0;
  x.assign(20, start);
  for (int hit = 0; hit < hits; ++hit, start += climb_mm) {
    for (int i = 1; i <= 5; ++i) x.push_back(start + 6.0 * i);
    for (int i = 1; i <= 10; ++i) x.push_back(start + 30.0 - (30.0 - climb_mm) * i / 10.0);
    x.insert(x.end(), rest_samples, x.back());
  }
  for (double& value : x) value *= 1e-3;
  motion.time = {0.0, 100.0, x.size()};
  return motion;
}

}  // namespace

TEST_CASE("hits that start ever deeper are a train with that climb", "[events]") {
  const auto motion = saw(5, 4.0);
  const auto found = events::hit_trains(motion, all_counted(motion), larch_fork);
  REQUIRE(found.size() == 1);
  CHECK(found[0].hits == 5);
  CHECK(found[0].first_start_m == Approx(0.020).epsilon(1e-9));
  CHECK(found[0].climb_m_per_hit == Approx(0.004).epsilon(1e-9));
  CHECK(found[0].begin_s == Approx(0.19).margin(0.011));
  CHECK(found[0].end_s == Approx(0.19 + 4 * 0.15 + 0.05).margin(0.011));
}

TEST_CASE("hits that recover fully are a train without climb", "[events]") {
  const auto motion = saw(4, 0.0);
  const auto found = events::hit_trains(motion, all_counted(motion), larch_fork);
  REQUIRE(found.size() == 1);
  CHECK(found[0].climb_m_per_hit == Approx(0.0).margin(1e-12));
}

TEST_CASE("hits far apart, too few or too small are no train", "[events]") {
  const auto apart = saw(5, 0.0, 40);
  CHECK(events::hit_trains(apart, all_counted(apart), larch_fork).empty());
  const auto few = saw(2, 0.0);
  CHECK(events::hit_trains(few, all_counted(few), larch_fork).empty());
  const auto small = saw(5, 0.0);
  CHECK(events::hit_trains(small, all_counted(small), {.stroke_m = 0.5}).empty());
}

TEST_CASE("a masked sample ends a train", "[events]") {
  const auto motion = saw(7, 0.0);
  auto counted = all_counted(motion);
  counted[20 + 3 * 15 + 14] = 0;
  const auto found = events::hit_trains(motion, counted, larch_fork);
  REQUIRE(found.size() == 2);
  CHECK(found[0].hits + found[1].hits == 7);
}

TEST_CASE("hit train options out of range are refused", "[events]") {
  const auto motion = saw(1, 0.0);
  const auto all = all_counted(motion);
  CHECK_THROWS_AS(events::hit_trains(motion, all, {.stroke_m = 0.0}), std::invalid_argument);
  CHECK_THROWS_AS(events::hit_trains(motion, all, {.stroke_m = 0.1, .fewest_hits = 1}),
                  std::invalid_argument);
  CHECK_THROWS_AS(events::hit_trains(motion, {}, larch_fork), std::invalid_argument);
}
