#include "clickwise/sim/scene.hpp"

#include <catch2/catch.hpp>

#include "clickwise/bike/bike_file.hpp"
#include "clickwise/core/errors.hpp"
#include "clickwise/sim/bike_clicks.hpp"
#include "short_scene.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using namespace clickwise::sim_test;

namespace {

// The message, less the folder.
std::string error_of(const Folder& folder, const std::string& text) {
  try {
    folder.scene(text);
  } catch (const core::InputError& error) {
    const std::string what = error.what();
    return what.substr(what.find("scene.toml"));
  }
  return "no error";
}

const bike::Clicks& front_valve(const bike::Bike& bike) {
  return *std::get<bike::HydraulicDamper>(*bike.front->damper).compression.valve;
}

}  // namespace

TEST_CASE("a scene is read with its bike, trail and logger", "[sim]") {
  const Folder folder;
  const Scene scene = folder.scene();
  CHECK(scene.seed == 4);
  CHECK(scene.ground.roughness_m3 == Approx(1024e-6));
  CHECK(std::get<Drop>(scene.ground.features.at(0)).height_m == 0.9);
  CHECK(scene.logger.rate_hz == 500.0);
  CHECK(scene.speed.length_m == 60.0);
  CHECK(scene.bike.front->stroke_m == Approx(0.17));
}

TEST_CASE("a scene's clicks go into the bike and its text, and nothing else moves", "[sim]") {
  const Folder folder;
  const Scene scene =
      folder.scene(changed(scene_text, "seed = 4",
                           "seed = 4\nset = { \"front.high_speed_compression\" = 4, "
                           "\"rear.low_speed_rebound\" = 12 }"));
  CHECK(front_valve(scene.bike).setting == 4);
  auto expected = changed(bike_text, "clicks = 12, setting = 11", "clicks = 12, setting = 4");
  expected = changed(expected, "open_mm_s = 70.0, clicks = 18, setting = 9",
                     "open_mm_s = 70.0, clicks = 18, setting = 12");
  CHECK(scene.bike.text == expected);
}

TEST_CASE("letters of several bytes and line ends of DOS do not lead a click astray", "[sim]") {
  const std::string text =
      "name = \"Größe\"\r\n[front.damper.compression]\r\n"
      "bleed = { note = \"ä→\", clicks = 16, setting = 8 } # ü\r\n";
  const std::string changed_text = with_clicks(
      text, "b.toml", {{bike::EndName::front, bike::Adjuster::low_speed_compression, 13, {}}});
  CHECK(changed_text == changed(text, "setting = 8", "setting = 13"));
}

TEST_CASE("what is wrong in a scene is told with its line and column", "[sim]") {
  const Folder folder;
  struct Case {
    const char* from;
    const char* to;
    const char* place;
  };
  const auto c = GENERATE(
      Case{"length_m = 60.0", "length_mm = 60.0", "scene.toml:4"},
      Case{"class = \"D\"", "class = \"K\"", "scene.toml:9:9"},
      Case{"seed = 4", "seed = -4", "scene.toml:3:8"},
      Case{"seed = 4", "seed = 4\nwheels = 2", "scene.toml:4:1"},
      Case{"kind = \"drop\"", "kind = \"cliff\"", "scene.toml:11:8"},
      Case{"height_m = 0.9", "height_m = \"high\"", "scene.toml:13:12"},
      Case{"[60, 9.0]", "[0, 9.0]", "scene.toml:6:9"},
      Case{"rate_hz = 500", "rate_hz = 0", "scene.toml:15:11"},
      Case{"seed = 4", "seed = 4\nset = { \"front.clicker\" = 4 }", "scene.toml:4:27"},
      Case{"seed = 4", "seed = 4\nset = { \"front.high_speed_rebound\" = 4 }", "scene.toml:4:38"},
      Case{"seed = 4", "seed = 4\nset = { \"front.low_speed_rebound\" = 99 }", "scene.toml:4:37"},
      Case{"seed = 4", "seed = ", "scene.toml:3"},
      Case{"clickwise-scene-1", "clickwise-scene-9", "scene.toml:1:10"});
  const std::string message = error_of(folder, changed(scene_text, c.from, c.to));
  INFO(message);
  CHECK(message.substr(0, std::string(c.place).size()) == c.place);
  CHECK(message.find("; ") != std::string::npos);
}

TEST_CASE("a bike file that is not there is an input error", "[sim]") {
  const Folder folder;
  CHECK_THROWS_AS(folder.scene(changed(scene_text, "bike.toml", "none.toml")), core::InputError);
}

TEST_CASE("the demo scenes can be read", "[sim]") {
  const std::string demos = CLICKWISE_SOURCE_DIR "/demo-runs/";
  for (const char* name : {"practice-run/scene.toml", "bottom-out-count/scene.toml",
                           "two-setups/scene-a.toml", "two-setups/scene-b.toml"})
    CHECK_NOTHROW(read_scene(demos + name));
}
