// Rides whose truth is known, logged with noise, and read back as a user's log would be.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <random>
#include <string>
#include <vector>

#include "clickwise/core/statistics.hpp"
#include "clickwise/sim/ride.hpp"
#include "clickwise/sim/scene.hpp"
#include "clickwise/workflow/review.hpp"

namespace clickwise::test {

// A folder that goes with the object.
class ScratchFolder {
public:
  ScratchFolder() {
    std::string name = (std::filesystem::temp_directory_path() / "clickwise-XXXXXX").string();
    path_ = mkdtemp(name.data());
  }
  ~ScratchFolder() { std::filesystem::remove_all(path_); }
  ScratchFolder(const ScratchFolder&) = delete;
  ScratchFolder& operator=(const ScratchFolder&) = delete;
  const std::filesystem::path& path() const { return path_; }

private:
  std::filesystem::path path_;
};

inline sim::Scene demo_scene(const std::string& name) {
  return sim::read_scene(std::string(CLICKWISE_SOURCE_DIR) + "/demo-runs/" + name);
}

// Writes the truth as the scene's logger would have, and the bike file, into the folder.
struct WrittenLog {
  std::string log_path;
  std::string bike_path;
};

inline WrittenLog write_log(const sim::Scene& scene, const sim::Truth& truth,
                            const std::filesystem::path& folder) {
  const WrittenLog written{(folder / "log.csv").string(), (folder / "bike.toml").string()};
  std::ofstream log(written.log_path, std::ios::binary);
  sim::write_log(scene.bike, scene.logger, truth, [&](std::string_view piece) {
    log.write(piece.data(), static_cast<std::streamsize>(piece.size()));
  });
  std::ofstream(written.bike_path, std::ios::binary) << scene.bike.text;
  return written;
}

// The truth, logged and loaded like any log.
inline workflow::Ride log_and_load(const sim::Scene& scene, const sim::Truth& truth) {
  const ScratchFolder folder;
  const WrittenLog written = write_log(scene, truth, folder.path());
  return workflow::load_ride({written.log_path, written.bike_path, {}});
}

inline workflow::Review log_and_review(const sim::Scene& scene, const sim::Truth& truth,
                                       const std::filesystem::path& folder) {
  const WrittenLog written = write_log(scene, truth, folder);
  return workflow::review({{written.log_path, written.bike_path, {}}, {}});
}

// How far one end's motion is from the truth, over its counted samples.
struct MotionErrors {
  double velocity_share = 0.0;            // rms error over rms velocity
  double central_difference_share = 0.0;  // the same of a plain central difference of the readings
  double within_one_sigma = 0.0;          // shares of the samples
  double within_two_sigma = 0.0;
  double worst_share_error = 0.0;  // of time above a split, splits 0.3 to 1.5 m/s
  double rest_error_m_s = 0.0;     // rms velocity error while standing
};

namespace detail {

// The truth's velocity at a time, straight between its samples.
inline double at(const std::vector<double>& series, double rate_hz, double t_s) {
  const double place = std::clamp(t_s * rate_hz, 0.0, static_cast<double>(series.size() - 1));
  const auto i = std::min(static_cast<std::size_t>(place), series.size() - 2);
  return series[i] + (place - static_cast<double>(i)) * (series[i + 1] - series[i]);
}

inline double share_above(const std::vector<double>& velocities, double split, double sign) {
  const auto above = std::count_if(velocities.begin(), velocities.end(),
                                   [&](double velocity) { return sign * velocity > split; });
  return static_cast<double>(above) / static_cast<double>(velocities.size());
}

}  // namespace detail

// `readings_m`: raw travel on the motion's base, for the central difference; may be empty.
inline MotionErrors motion_errors(const workflow::RideEnd& ride, const sim::EndTruth& truth,
                                  double truth_rate_hz, double stand_until_s,
                                  const std::vector<double>& readings_m = {}) {
  const run::Motion& motion = ride.motion;
  std::vector<double> found;
  std::vector<double> true_velocity;
  double squares = 0.0;
  double error_squares = 0.0;
  double difference_squares = 0.0;
  double one_sigma = 0.0;
  double two_sigma = 0.0;
  double rest_squares = 0.0;
  double rest_samples = 0.0;
  for (std::size_t i = 1; i + 1 < motion.time.samples; ++i) {
    const double t_s = motion.time.at(i);
    const double velocity = detail::at(truth.velocity_m_s, truth_rate_hz, t_s);
    const double error = motion.velocity_m_s[i] - velocity;
    if (motion.valid[i] && t_s > 0.5 && t_s < stand_until_s - 0.5) {
      rest_squares += error * error;
      rest_samples += 1.0;
    }
    if (!ride.counted[i]) continue;
    found.push_back(motion.velocity_m_s[i]);
    true_velocity.push_back(velocity);
    squares += velocity * velocity;
    error_squares += error * error;
    one_sigma += std::abs(error) <= motion.velocity_sigma_m_s[i] ? 1.0 : 0.0;
    two_sigma += std::abs(error) <= 2.0 * motion.velocity_sigma_m_s[i] ? 1.0 : 0.0;
    if (readings_m.empty()) continue;
    const double difference =
        0.5 * (readings_m[i + 1] - readings_m[i - 1]) * motion.time.rate_hz - velocity;
    difference_squares += difference * difference;
  }
  const auto samples = static_cast<double>(found.size());
  MotionErrors errors;
  errors.velocity_share = std::sqrt(error_squares / squares);
  errors.central_difference_share = std::sqrt(difference_squares / squares);
  errors.within_one_sigma = one_sigma / samples;
  errors.within_two_sigma = two_sigma / samples;
  for (double split = 0.3; split < 1.55; split += 0.1)
    for (const double sign : {1.0, -1.0})
      errors.worst_share_error = std::max(
          errors.worst_share_error, std::abs(detail::share_above(found, split, sign) -
                                             detail::share_above(true_velocity, split, sign)));
  if (rest_samples > 0.0) errors.rest_error_m_s = std::sqrt(rest_squares / rest_samples);
  return errors;
}

// Raw travel of an end at the truth's samples nearest to the base, with the logger's noise and
// quantisation drawn anew: what a plain difference would have to work with.
inline std::vector<double> noisy_readings_m(const workflow::RideEnd& ride, const sim::Scene& scene,
                                            const sim::EndTruth& truth, double truth_rate_hz) {
  const bike::Potentiometer& sensor = scene.bike.end(ride.name)->sensor;
  std::vector<double> travels_m = sensor.travel_m.y();
  std::vector<double> at_readings = sensor.travel_m.x();
  if (travels_m.front() > travels_m.back()) {
    std::reverse(travels_m.begin(), travels_m.end());
    std::reverse(at_readings.begin(), at_readings.end());
  }
  const core::Polyline reading_of(travels_m, at_readings);
  std::mt19937_64 generator(scene.logger.seed);
  std::normal_distribution<double> normal;
  std::vector<double> readings;
  for (std::size_t i = 0; i < ride.motion.time.samples; ++i) {
    const double travel_m = detail::at(truth.travel_m, truth_rate_hz, ride.motion.time.at(i));
    const double reading = reading_of(travel_m) + scene.logger.noise_counts * normal(generator);
    readings.push_back(sensor.travel_m(std::round(reading)));
  }
  return readings;
}

}  // namespace clickwise::test
