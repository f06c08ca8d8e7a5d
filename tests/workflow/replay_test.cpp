#include "clickwise/workflow/replay.hpp"

#include <catch2/catch.hpp>

#include "support/invented_log.hpp"

using namespace clickwise;

namespace {

// A minute of the practice run, written once for all cases.
const test::WrittenLog& practice_log() {
  static const test::ScratchFolder folder;
  static const test::WrittenLog written = [] {
    sim::Scene scene = test::demo_scene("practice-run/scene.toml");
    scene.speed.length_m = 450.0;
    scene.logger.noise_counts = 0.6;
    return test::write_log(scene, sim::simulate(scene), folder.path());
  }();
  return written;
}

workflow::ReplayOptions options(const std::vector<std::string>& settings) {
  workflow::ReplayOptions result;
  result.ride = {practice_log().log_path, practice_log().bike_path, {}};
  result.settings = settings;
  return result;
}

// The change of a figure between the scene's two truths: as it is, and with other clicks.
sim::EndFigures truth_with(int high_speed_compression) {
  sim::Scene scene = test::demo_scene("practice-run/scene.toml");
  scene.speed.length_m = 450.0;
  auto& damper = std::get<bike::HydraulicDamper>(*scene.bike.front->damper);
  damper.compression.valve->setting = high_speed_compression;
  const sim::Truth truth = sim::simulate(scene);
  sim::EndFigures figures;
  double travel = 0.0;
  for (const double x : truth.front->travel_m) travel += x;
  figures.travel_mean_m = travel / static_cast<double>(truth.samples());
  figures.bottom_outs = truth.front->bottom_outs;
  return figures;
}

}  // namespace

TEST_CASE("the present settings give the ride back and change nothing", "[workflow][slow]") {
  const workflow::Replay replay = workflow::replay(options({}));
  REQUIRE(replay.ends.size() == 2);
  for (const workflow::EndReplay& end : replay.ends) {
    CHECK_FALSE(end.changed);
    CHECK(end.result.carries_its_weight());
    CHECK(end.result.travel_rms_m < 1e-3);
    for (std::size_t m = 0; m < sim::metrics; ++m)
      CHECK(end.result.predictions.front().changes[m].change == 0.0);
  }
}

TEST_CASE("firmer high-speed compression changes the ride as the truth does", "[workflow][slow]") {
  const workflow::Replay replay = workflow::replay(options({"front.high_speed_compression=9"}));
  const sim::EndFigures now = truth_with(12);
  const sim::EndFigures then = truth_with(9);
  const sim::Prediction& front = replay.ends[0].result.predictions.front();
  const sim::Change& mean = front.change(sim::Metric::travel_mean);
  // The truth's mean counts the standing at both ends of the log; both hold the same weight there.
  CHECK(mean.change < 0.0);
  CHECK(mean.change == Approx(then.travel_mean_m - now.travel_mean_m).epsilon(0.35));
  CHECK(replay.ends[0].changed);
  CHECK_FALSE(replay.ends[1].changed);
}

TEST_CASE("the same seed gives the same replay", "[workflow][slow]") {
  const auto once = workflow::replay(options({"front.low_speed_rebound=12"}));
  const auto twice = workflow::replay(options({"front.low_speed_rebound=12"}));
  CHECK(once.ends[0].result.predictions[0].changes[6].low ==
        twice.ends[0].result.predictions[0].changes[6].low);
}

TEST_CASE("a click map holds every setting of both knobs", "[workflow][slow]") {
  const workflow::ClickMap map =
      workflow::click_map(options({}), "front.low_speed_compression,front.high_speed_compression");
  CHECK(map.cells.size() == 17u * 14u);
  CHECK(map.first.setting == 8);
  CHECK_THROWS_AS(workflow::click_map(options({}), "front.low_speed_compression"),
                  core::InputError);
  CHECK_THROWS_AS(
      workflow::click_map(options({}), "front.low_speed_compression,rear.low_speed_compression"),
      core::InputError);
}

TEST_CASE("a bike file that knows too little is told what to add", "[workflow]") {
  workflow::ReplayOptions asked = options({});
  const test::ScratchFolder folder;
  asked.ride.bike_path = (folder.path() / "bike.toml").string();
  std::ofstream(asked.ride.bike_path) << R"(schema = "clickwise-bike-1"
[log]
time = { column = "t_us", unit = "us" }
[front]
stroke_mm = 170.0
[front.sensor]
kind = "potentiometer"
column = "fork_adc"
calibration = [[210, 0.0], [3850, 170.0]]
)";
  CHECK_THROWS_AS(workflow::replay(asked), core::JobError);
}
