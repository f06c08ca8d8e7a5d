// An invented ride of one fork, from the trail to the advice: what a setter would be shown.
#pragma once

#include <fmt/format.h>

#include <string>

#include "clickwise/sim/random.hpp"
#include "clickwise/workflow/review.hpp"
#include "support/invented_log.hpp"

namespace clickwise::test {

// Larch's fork; what a test changes of it.
struct Fork {
  std::string spring = "[[0, 90], [40, 300], [120, 760], [170, 1500]]";  // mm, N
  double compression_closed_mm_s = 12.0;
  int low_speed_compression = 8;  // of 16
  double valve_closed_n = 620.0;
  double valve_open_n = 140.0;
  int high_speed_compression = 6;  // of 12
  double valve_slope_n_s_m = 180.0;
  int low_speed_rebound = 9;  // of 18
  double rebound_valve_n = 90.0;
  double rebound_slope_n_s_m = 520.0;
  double rider_kg = 78.0;  // as the bike file says
  std::string unsprung_mass = "unsprung_mass_kg = 2.9";
  std::string damper = {};  // the table's text in place of the figures above

  std::string hydraulic() const {
    return fmt::format(R"(kind = "hydraulic"
[front.damper.compression]
bleed = {{ closed_mm_s = {}, open_mm_s = 190.0, clicks = 16, setting = {} }}
valve = {{ closed_n = {}, open_n = {}, clicks = 12, setting = {}, slope_n_s_m = {} }}
port = {{ n_s2_m2 = 22.0 }}
[front.damper.rebound]
bleed = {{ closed_mm_s = 25.0, open_mm_s = 320.0, clicks = 18, setting = {} }}
valve = {{ fixed_n = {}, slope_n_s_m = {} }}
port = {{ n_s2_m2 = 30.0 }}
)",
                       compression_closed_mm_s, low_speed_compression, valve_closed_n, valve_open_n,
                       high_speed_compression, valve_slope_n_s_m, low_speed_rebound,
                       rebound_valve_n, rebound_slope_n_s_m);
  }

  std::string text() const {
    return fmt::format(R"(schema = "clickwise-bike-1"
name = "Larch, practice mule"
[log]
time = {{ column = "t_us", unit = "us" }}
[rider]
mass_kg = {}
[chassis]
mass_kg = 16.2
front_share = 0.42
[front]
stroke_mm = 170.0
{}
friction_n = 15.0
tyre = {{ stiffness_n_mm = 90.0, damping_n_s_m = 150.0 }}
split = {{ compression_mm_s = 700.0, rebound_mm_s = 700.0 }}
[front.sensor]
kind = "potentiometer"
column = "fork_adc"
calibration = [[210, 0.0], [3850, 170.0]]
[front.spring]
kind = "table"
points = {}
bumper = {{ length_mm = 12.0, end_force_n = 2500.0 }}
[front.damper]
{})",
                       rider_kg, unsprung_mass, spring, damper.empty() ? hydraulic() : damper);
  }
};

// One kind of thing on a trail: its keys in the scene file, and what it takes of the trail.
struct Obstacle {
  std::string keys;
  double every_m;
};

// A trail of obstacles in seeded order, some way apart.
inline std::string trail_text(const std::string& roughness, const std::vector<Obstacle>& obstacles,
                              double length_m, std::uint64_t seed) {
  sim::Random random(seed, 3);
  std::string text = fmt::format("[ground]\nclass = \"{}\"\n", roughness);
  for (double at_m = 20.0; at_m < length_m - 30.0;) {
    const auto which =
        static_cast<std::size_t>(random.uniform() * static_cast<double>(obstacles.size()));
    text += fmt::format("[[ground.feature]]\nat_m = {:.2f}\n{}\n", at_m, obstacles[which].keys);
    at_m += obstacles[which].every_m * (0.7 + 0.6 * random.uniform());
  }
  return text;
}

// The ride of a fork over a trail, logged at 1 kHz with 12 bits, and reviewed.
class ForkRide {
public:
  ForkRide(const Fork& fork, const std::string& trail, double length_m, double speed_m_s,
           std::uint64_t seed) {
    write("bike.toml", fork.text());
    const std::string path = (folder_.path() / "scene.toml").string();
    const sim::Scene scene = sim::parse_scene(
        fmt::format("schema = \"clickwise-scene-1\"\nbike = \"bike.toml\"\nseed = {}\n"
                    "[ride]\nlength_m = {}\nspeed = [[0, {}], [{}, {}]]\nstand_before_s = 2.0\n{}"
                    "[logger]\nrate_hz = 1000\nadc_bits = 12\nnoise_counts = 0.6\n",
                    seed, length_m, speed_m_s, length_m, speed_m_s, trail),
        path);
    written_ = write_log(scene, sim::simulate(scene), folder_.path());
  }

  workflow::Review review(bool by_rule = false) const {
    workflow::ReviewOptions options{{written_.log_path, written_.bike_path, {}}, {}};
    options.advice_by_rule = by_rule;
    return workflow::review(options);
  }

  // The same log with another bike file.
  workflow::Review review_with(const Fork& fork) const {
    write("other.toml", fork.text());
    return workflow::review(
        {{written_.log_path, (folder_.path() / "other.toml").string(), {}}, {}});
  }

private:
  void write(const std::string& name, const std::string& text) const {
    std::ofstream(folder_.path() / name, std::ios::binary) << text;
  }

  ScratchFolder folder_;
  WrittenLog written_;
};

}  // namespace clickwise::test
