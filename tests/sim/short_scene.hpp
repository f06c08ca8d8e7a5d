// A short ride to take apart: bike and scene as texts, laid into a folder of their own.
#pragma once

#include <filesystem>
#include <fstream>
#include <iterator>
#include <string>

#include "clickwise/sim/scene.hpp"

namespace clickwise::sim_test {

inline const std::string bike_text = R"(schema = "clickwise-bike-1"
[log]
time = { column = "t_us", unit = "us" }
speed = { column = "wheel_kmh", unit = "km/h" }
[rider]
mass_kg = 78.0
[chassis]
mass_kg = 16.2
front_share = 0.42
wheelbase_mm = 1245.0
[front]
stroke_mm = 170.0
unsprung_mass_kg = 2.9
friction_n = 15.0
[front.sensor]
kind = "potentiometer"
column = "fork_adc"
calibration = [[3850, 0.0], [210, 170.0]]
[front.spring]
kind = "table"
points = [[0, 90], [40, 300], [120, 760], [170, 1500]]
[front.damper]
kind = "hydraulic"
[front.damper.compression]
bleed = { closed_mm_s = 12.0, open_mm_s = 190.0, clicks = 16, setting = 8 }  # half way
valve = { closed_n = 620.0, open_n = 140.0, clicks = 12, setting = 11, slope_n_s_m = 180.0 }
[front.damper.rebound]
bleed = { closed_mm_s = 25.0, open_mm_s = 320.0, clicks = 18, setting = 9 }
valve = { fixed_n = 90.0, slope_n_s_m = 520.0 }
[rear]
stroke_mm = 65.0
unsprung_mass_kg = 3.8
ratio = [[0, 3.0], [65, 2.4]]
[rear.sensor]
kind = "potentiometer"
column = "shock_adc"
calibration = [[300, 0.0], [3700, 65.0]]
[rear.spring]
kind = "coil"
rate_n_mm = 80.0
[rear.damper]
kind = "hydraulic"
[rear.damper.compression]
bleed = { closed_mm_s = 3.0, open_mm_s = 40.0, clicks = 16, setting = 8 }
valve = { closed_n = 1500.0, open_n = 400.0, clicks = 12, setting = 5, slope_n_s_m = 1100.0 }
[rear.damper.rebound]
bleed = { closed_mm_s = 5.0, open_mm_s = 70.0, clicks = 18, setting = 9 }
valve = { fixed_n = 300.0, slope_n_s_m = 3800.0 }
)";

inline const std::string scene_text = R"(schema = "clickwise-scene-1"
bike = "bike.toml"
seed = 4
[ride]
length_m = 60.0
speed = [[0, 7.0], [60, 9.0]]
stand_before_s = 1.0
[ground]
class = "D"
[[ground.feature]]
kind = "drop"
at_m = 30.0
height_m = 0.9
[logger]
rate_hz = 500
)";

// A folder that goes when the test does.
class Folder {
public:
  Folder() {
    static int number = 0;
    path_ = std::filesystem::temp_directory_path() /
            ("clickwise-sim-" + std::to_string(++number) + "-" +
             std::to_string(reinterpret_cast<std::uintptr_t>(this)));
    std::filesystem::create_directories(path_);
    write("bike.toml", bike_text);
  }
  ~Folder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;

  std::string file(const std::string& name) const { return (path_ / name).string(); }
  void write(const std::string& name, const std::string& text) const {
    std::ofstream(file(name), std::ios::binary) << text;
  }
  std::string read(const std::string& name) const {
    std::ifstream in(file(name), std::ios::binary);
    return {std::istreambuf_iterator<char>(in), {}};
  }
  sim::Scene scene(const std::string& text = scene_text) const {
    return sim::parse_scene(text, file("scene.toml"));
  }

private:
  std::filesystem::path path_;
};

// `text` with the first `from` made `to`.
inline std::string changed(std::string text, const std::string& from, const std::string& to) {
  const std::size_t at = text.find(from);
  return at == std::string::npos ? "not found: " + from : text.replace(at, from.size(), to);
}

}  // namespace clickwise::sim_test
