#include "clickwise/sim/ride.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <numeric>

#include "clickwise/core/errors.hpp"
#include "clickwise/sim/truth_figures.hpp"
#include "short_scene.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using namespace clickwise::sim_test;

TEST_CASE("a ride stands, rides its length, and knows both ends", "[sim]") {
  const Folder folder;
  const Truth truth = simulate(folder.scene());
  CHECK(truth.rate_hz == 1000.0);
  CHECK(truth.progress.ride_begin_s == Approx(1.0));
  CHECK(truth.progress.distance_m.back() == Approx(60.0).margin(0.05));
  REQUIRE(truth.front);
  REQUIRE(truth.rear);
  CHECK(truth.front->travel_m.size() == truth.samples());
  const auto& travel = truth.front->travel_m;
  const auto [low, high] = std::minmax_element(travel.begin(), travel.begin() + 900);
  CHECK(*high - *low < 1e-5);  // standing
}

TEST_CASE("the same scene gives the same ride bit for bit, whatever the threads", "[sim]") {
  const Folder folder;
  const Truth a = simulate(folder.scene());
  const Truth b = simulate(folder.scene());
  CHECK(a.front->travel_m == b.front->travel_m);
  CHECK(a.rear->velocity_m_s == b.rear->velocity_m_s);
  const Truth other = simulate(folder.scene(changed(scene_text, "seed = 4", "seed = 5")));
  CHECK(a.front->travel_m != other.front->travel_m);
}

TEST_CASE("the rear wheel meets the front's ground one wheelbase later", "[sim]") {
  const Folder folder;
  const Truth truth = simulate(folder.scene());
  const auto& distance = truth.progress.distance_m;
  for (const double at_m : {20.0, 30.3, 45.0}) {
    const auto sample = [&](double d) {
      return static_cast<std::size_t>(std::lower_bound(distance.begin(), distance.end(), d) -
                                      distance.begin());
    };
    // One sample is 9 mm of trail; the steepest ground on it falls by as much.
    CHECK(truth.rear->ground_m[sample(at_m + 1.245)] ==
          Approx(truth.front->ground_m[sample(at_m)]).margin(0.02));
  }
}

TEST_CASE("velocity is the rate of travel", "[sim]") {
  const Folder folder;
  const Truth truth = simulate(folder.scene());
  for (const auto* end : {&*truth.front, &*truth.rear}) {
    double error = 0.0;
    double power = 0.0;
    for (std::size_t i = 1; i + 1 < truth.samples(); ++i) {
      const double rate = (end->travel_m[i + 1] - end->travel_m[i - 1]) * 0.5 * truth.rate_hz;
      error += std::pow(rate - end->velocity_m_s[i], 2);
      power += rate * rate;
    }
    CHECK(error < 1e-3 * power);
  }
}

TEST_CASE("a bottom-out is counted once an excursion, where travel crosses the line", "[sim]") {
  const Folder folder;
  const Scene scene = folder.scene();
  const Truth truth = simulate(scene);
  const double line_m = scene.bike.front->stroke_m - scene.bike.front->bottom_out_within_m;
  int crossings = 0;
  bool armed = true;
  for (const double x : truth.front->travel_m) {
    crossings += armed && x >= line_m;
    armed = armed ? x < line_m : x < line_m + 0.004 - 0.016;
  }
  REQUIRE(crossings >= 1);
  CHECK(truth.front->bottom_outs.size() >= static_cast<std::size_t>(crossings));
  for (const auto& stop : truth.front->bottom_outs) {
    CHECK(stop.depth_m >= line_m);
    CHECK(stop.closing_speed_m_s > 0.0);
    const auto i = static_cast<std::size_t>(stop.t_s * truth.rate_hz);
    CHECK(truth.front->travel_m[i] < line_m);
    CHECK(truth.front->travel_m[i + 1] > line_m - 0.5e-3);
  }
}

TEST_CASE("over a drop the wheels leave the ground and the tyre carries nothing", "[sim]") {
  const Folder folder;
  const Truth truth = simulate(folder.scene());
  const auto& front = *truth.front;
  CHECK(std::count(front.airborne.begin(), front.airborne.end(), 1) > 100);
  for (std::size_t i = 0; i < truth.samples(); ++i)
    REQUIRE((front.airborne[i] != 0) == (front.tyre_n[i] == 0.0));
}

TEST_CASE("firmer clicks use less travel on the same ground", "[sim]") {
  const Folder folder;
  const auto mean = [&](int setting) {
    const Scene scene = folder.scene(changed(
        scene_text, "seed = 4",
        "seed = 4\nset = { \"front.high_speed_compression\" = " + std::to_string(setting) + " }"));
    const Truth truth = simulate(scene);
    return truth_figures(scene, truth, bike::EndName::front).travel_mean_m;
  };
  CHECK(mean(2) < mean(10) - 1e-3);
}

TEST_CASE("a finer step moves the ride's figures by less than a sensor could tell", "[sim]") {
  const Folder folder;
  const Scene coarse = folder.scene();
  Scene fine = coarse;
  fine.step_s = 2e-5;
  const auto a = truth_figures(coarse, simulate(coarse), bike::EndName::front);
  const auto b = truth_figures(fine, simulate(fine), bike::EndName::front);
  CHECK(a.travel_mean_m == Approx(b.travel_mean_m).margin(0.2e-3));
  CHECK(a.travel_max_m == Approx(b.travel_max_m).margin(0.5e-3));
  CHECK(a.compression.p95_m_s == Approx(b.compression.p95_m_s).epsilon(0.02));
}

TEST_CASE("band seconds of the truth add up to the riding time", "[sim]") {
  const Folder folder;
  const Scene scene = folder.scene(
      changed(scene_text, "stand_before_s = 1.0", "stand_before_s = 6.0\nstand_after_s = 4.0"));
  const Truth truth = simulate(scene);
  const auto figures = truth_figures(scene, truth, bike::EndName::rear);
  const double seconds = figures.compression.low_s + figures.compression.high_s +
                         figures.rebound.low_s + figures.rebound.high_s;
  const double all_s = static_cast<double>(truth.samples()) / truth.rate_hz;
  CHECK(seconds == Approx(all_s - 6.0).margin(2e-3));  // 4 s of standing still count
}

TEST_CASE("a ride too long to hold is refused with its place", "[sim]") {
  const Folder folder;
  const Scene scene =
      folder.scene(changed(scene_text, "length_m = 60.0\nspeed = [[0, 7.0], [60, 9.0]]",
                           "length_m = 40000.0\nspeed = [[0, 0.0]]"));
  CHECK_THROWS_AS(simulate(scene), core::JobError);
  CHECK_THROWS_WITH(simulate(scene), Catch::Contains("scene.toml:4"));
}

TEST_CASE("a bike without a spring cannot be ridden, and the key is named", "[sim]") {
  const Folder folder;
  folder.write("bike.toml",
               changed(bike_text, "[rear.spring]\nkind = \"coil\"\nrate_n_mm = 80.0\n", ""));
  CHECK_THROWS_WITH(simulate(folder.scene()), Catch::Contains("rear.spring"));
  CHECK_THROWS_AS(simulate(folder.scene()), core::JobError);
}
