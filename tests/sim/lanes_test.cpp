#include "clickwise/sim/lanes.hpp"

#include <catch2/catch.hpp>

#include "clickwise/sim/forward.hpp"
#include "replay_rides.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using namespace clickwise::replay_rides;

namespace {

struct Recovered {
  Ride ride;
  VehicleEnd end;
  std::vector<LaneStretch> stretches;
  TallyPlan plan;
};

Recovered some_ground(int number) {
  Ride ride = ride_number(number, 6, 20.0);
  const auto truth = ride.truth(ride.parts);
  const auto log = log_of(truth, ride.parts.end.stroke_m, 9);
  const VehicleEnd end = ride.parts.vehicle();
  LaneStretch stretch{recover_forcing(end, {1e-3, log.travel_m, log.velocity_m_s}), 0,
                      std::vector<std::uint8_t>(log.travel_m.size(), 1)};
  std::fill_n(stretch.counted.begin(), 500, std::uint8_t{0});
  TallyPlan plan;
  plan.interval_s = 1e-3;
  plan.split_m_s = {0.213, 0.178};
  plan.stroke_m = end.stroke_m;
  plan.bottom_out_within_m = ride.parts.end.bottom_out_within_m;
  return {ride, end, {stretch}, plan};
}

double high_share(const Tally& tally, std::size_t direction) {
  const auto sum = tally.total();
  return sum.high[direction] / sum.samples;
}

}  // namespace

// Lanes are single precision: a speed within 1e-6 m/s of the split may fall on the other side, and
// contacts amplify rounding a little. Histogram cells: 10 mm/s at a p95 between samples.
TEST_CASE("a lane counts what the plain loop rides", "[sim][replay]") {
  for (const int number : {1, 2, 3}) {
    const Recovered ground = some_ground(number);
    const Ridden ridden = ride_forward(ground.end, ground.stretches[0].forcing);
    const Figures plain = figures(ridden.travel_m, ridden.velocity_m_s, ground.end, 0.213, 500,
                                  ground.plan.bottom_out_within_m);
    const Tally lane = ride_lanes(std::vector{ground.end}, ground.stretches, ground.plan)[0];
    const auto sum = lane.total();
    CHECK(sum.samples == Approx(static_cast<double>(ridden.travel_m.size()) - 500.0));
    CHECK(high_share(lane, 0) == Approx(plain.high_share[0]).margin(2e-4));
    CHECK(sum.high_j[0] == Approx(plain.high_j[0]).epsilon(2e-3));
    CHECK(lane.speed_quantile_m_s(0, 0.95) == Approx(plain.p95_m_s[0]).margin(6e-3));
    CHECK(lane.speed_quantile_m_s(1, 0.95) == Approx(plain.p95_m_s[1]).margin(6e-3));
    CHECK(sum.travel_m / sum.samples == Approx(plain.mean_m).margin(2e-5));
    CHECK(lane.travel_quantile_m(0.95) == Approx(plain.p95_m).margin(2e-4));
    CHECK(static_cast<double>(lane.bottom_outs.size()) == plain.bottom_outs);
  }
}

TEST_CASE("every counted sample is in each histogram and in one block", "[sim][replay]") {
  const Recovered ground = some_ground(4);
  const Tally tally = ride_lanes(std::vector{ground.end}, ground.stretches, ground.plan)[0];
  const auto sum = tally.total();
  double in_speed = 0.0, in_travel = 0.0;
  for (const auto& cells : tally.speed)
    for (const auto count : cells) in_speed += count;
  for (const auto count : tally.travel) in_travel += count;
  CHECK(in_speed == sum.samples);
  CHECK(in_travel == sum.samples);
  CHECK(sum.moving[0] + sum.moving[1] == sum.samples);
  CHECK(tally.blocks.size() == 5);
  CHECK(tally.blocks[1].samples == 5000.0);
}

TEST_CASE("a lane does not see its neighbours", "[sim][replay]") {
  const Recovered ground = some_ground(2);
  std::vector<VehicleEnd> ends;
  for (int i = 0; i < 21; ++i) {
    Parts parts = ground.ride.parts;
    parts.damper.compression.valve->setting = i % 12;
    if (i % 3 == 0) parts.sprung_kg *= 1.1;
    if (i % 4 == 0)
      std::get<bike::TableSpring>(parts.end.spring->kind).force_n =
          core::Polyline({0.0, 0.170}, {100.0, 1300.0});
    ends.push_back(parts.vehicle());
  }
  const auto together = ride_lanes(ends, ground.stretches, ground.plan);
  for (const std::size_t i : {std::size_t{0}, std::size_t{7}, std::size_t{20}}) {
    const Tally alone = ride_lanes(std::vector{ends[i]}, ground.stretches, ground.plan)[0];
    CHECK(together[i].total().travel_m == alone.total().travel_m);
    CHECK(together[i].speed == alone.speed);
  }
}

TEST_CASE("a recorded series is counted by hand on ten samples", "[sim][replay]") {
  const std::vector<double> x{0.01, 0.02, 0.03, 0.05, 0.08, 0.097, 0.099, 0.08, 0.05, 0.02};
  const std::vector<double> v{0.0, 0.1, 0.2, 0.5, 0.9, 0.4, -0.1, -0.5, -0.9, -0.2};
  const std::vector<std::uint8_t> counted{1, 1, 1, 1, 1, 1, 1, 1, 1, 0};
  TallyPlan plan;
  plan.interval_s = 1e-3;
  plan.split_m_s = {0.5, 0.5};
  plan.stroke_m = 0.1;
  plan.bottom_out_within_m = 4e-3;
  const damper::Law law{.slope_n_s_m = 100.0};
  const SeriesStretch stretch{x, v, 0, counted};
  const Tally tally = count_series(std::span(&stretch, 1), {law, law}, plan);
  const auto sum = tally.total();
  CHECK(sum.samples == 9.0);
  CHECK(sum.moving[0] == 6.0);
  CHECK(sum.high[0] == 1.0);  // a speed at the split is low
  CHECK(sum.high[1] == 1.0);
  CHECK(sum.high_j[0] == Approx(100.0 * 0.81 * 1e-3));
  REQUIRE(tally.bottom_outs.size() == 1);
  CHECK(tally.bottom_outs[0].depth_m == Approx(0.099));
  CHECK(tally.bottom_outs[0].closing_speed_m_s == Approx(0.9 - 0.5 * 16.0 / 17.0));
}

TEST_CASE("no crossing is read into time that is not counted", "[sim][replay]") {
  const std::vector<double> x{0.05, 0.06, 0.098, 0.099, 0.05};
  const std::vector<double> v(5, 0.1);
  const std::vector<std::uint8_t> counted{1, 0, 1, 1, 1};
  TallyPlan plan;
  plan.interval_s = 1e-3;
  plan.stroke_m = 0.1;
  const SeriesStretch stretch{x, v, 0, counted};
  const Tally tally = count_series(std::span(&stretch, 1), {}, plan);
  CHECK(tally.bottom_outs.empty());
}
