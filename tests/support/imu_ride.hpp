// Invented rides with inertial units in place of, or beside, the potentiometers.
#pragma once

#include <string>

#include "clickwise/bike/bike_file.hpp"
#include "support/bike_text.hpp"
#include "support/invented_log.hpp"

namespace clickwise::test {

inline const std::string fork_units =
    "upper = { accel = [\"u_ax\", \"u_ay\", \"u_az\"], gyro = [\"u_gx\", \"u_gy\", \"u_gz\"] }\n"
    "lower = { accel = [\"l_ax\", \"l_ay\", \"l_az\"], gyro = [\"l_gx\", \"l_gy\", \"l_gz\"] }\n"
    "accel_unit = \"g\"\ngyro_unit = \"deg/s\"\naxis = [0, 0, 1]\n";
inline const std::string link_units =
    "upper = { gyro = [\"f_gx\", \"f_gy\", \"f_gz\"] }\n"
    "lower = { gyro = [\"s_gx\", \"s_gy\", \"s_gz\"] }\n"
    "gyro_unit = \"deg/s\"\nswing_axis = [0, 1, 0]\narm_mm = 430\n";

// The text of one end's sensor table in a bike file: from its header to the next one.
inline std::string with_sensor(const std::string& text, const std::string& end,
                               const std::string& sensor) {
  const std::string header = "[" + end + ".sensor]\n";
  const auto begin = text.find(header) + header.size();
  return text.substr(0, begin) + sensor + "\n" + text.substr(text.find("[" + end, begin));
}

// Units as the must-show line has them: 16 g, 150 ug/sqrt(Hz), 40 mg, 3 degrees, 1 kHz.
inline sim::Scene imu_scene(const std::string& name, const std::string& front_sensor,
                            const std::string& rear_sensor = "") {
  sim::Scene scene = demo_scene(name);
  scene.logger.rate_hz = 1000.0;
  scene.logger.noise_counts = 0.6;
  scene.logger.faults.clear();
  scene.logger.imu.bias_mg = 40.0;
  scene.logger.imu.mounting_deg = 3.0;
  scene.logger.imu.gyro_bias_deg_s = 0.5;
  std::string text = scene.bike.text;
  if (!front_sensor.empty()) text = with_sensor(text, "front", front_sensor);
  if (!rear_sensor.empty()) text = with_sensor(text, "rear", rear_sensor);
  scene.bike = bike::parse_bike(text, "bike.toml");
  return scene;
}

}  // namespace clickwise::test
