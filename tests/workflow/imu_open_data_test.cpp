// IMU estimates against open recordings with an independent truth.
#include <Eigen/Geometry>
#include <array>
#include <catch2/catch.hpp>
#include <cmath>
#include <filesystem>
#include <fstream>
#include <numbers>
#include <sstream>

#include "clickwise/core/units.hpp"
#include "clickwise/motion/second_opinion.hpp"
#include "clickwise/signal/kalman.hpp"
#include "clickwise/signal/savitzky_golay.hpp"
#include "support/invented_log.hpp"

using namespace clickwise;

namespace {

const std::string shared = CLICKWISE_SHARED_DIR;

// A millimetre a degree, so that the shaft's 180 degrees are a stroke.
const std::string bench_head =
    "schema = \"clickwise-bike-1\"\n[log]\ntime = { column = \"time_s\", unit = \"s\" }\n"
    "[front]\nstroke_mm = 185\n[front.sensor]\n";
const std::string encoder =
    "kind = \"potentiometer\"\ncolumn = \"encoder_deg\"\ncalibration = [[0, 0], [180, 180]]\n";
const std::string gyros =
    "upper = { gyro = [\"imu1_gyr_x_degps\", \"imu1_gyr_y_degps\", \"imu1_gyr_z_degps\"] }\n"
    "lower = { gyro = [\"imu2_gyr_x_degps\", \"imu2_gyr_y_degps\", \"imu2_gyr_z_degps\"] }\n"
    "gyro_unit = \"deg/s\"\nswing_axis = [1, 0, 0]\narm_mm = 57.29577951\n";

workflow::Ride load(const std::string& log, const std::string& bike_text) {
  const test::ScratchFolder folder;
  const std::string bike = (folder.path() / "bike.toml").string();
  std::ofstream(bike) << bike_text;
  return workflow::load_ride({log, bike, {}});
}

// Second-order Butterworth (bilinear), forwards and backwards.
std::vector<double> zero_phase(std::vector<double> x, double cut_hz, double rate_hz, bool high) {
  const double k = std::tan(std::numbers::pi * cut_hz / rate_hz);
  const double norm = 1.0 / (1.0 + std::numbers::sqrt2 * k + k * k);
  const double b0 = (high ? 1.0 : k * k) * norm;
  const double b1 = (high ? -2.0 : 2.0) * b0;
  const double a1 = 2.0 * (k * k - 1.0) * norm;
  const double a2 = (1.0 - std::numbers::sqrt2 * k + k * k) * norm;
  for (int way = 0; way < 2; ++way) {
    double s1 = 0.0, s2 = 0.0;
    for (double& value : x) {
      const double y = b0 * value + s1;
      s1 = b1 * value - a1 * y + s2;
      s2 = b0 * value - a2 * y;
      value = y;
    }
    std::reverse(x.begin(), x.end());
  }
  return x;
}

std::vector<double> banded(const std::vector<double>& x, double rate_hz) {
  return zero_phase(zero_phase(x, 0.3, rate_hz, true), 20.0, rate_hz, false);
}

// Velocity of an acceleration with a bias, by the smoother of imu_pair's sliding kind: the place is
// known to stay within some 0.3 m.
std::vector<double> integrated(const std::vector<double>& a, double rate_hz) {
  const double dt = 1.0 / rate_hz;
  Eigen::Matrix3d transition = Eigen::Matrix3d::Identity();
  transition(0, 1) = dt;
  transition(0, 2) = -0.5 * dt * dt;
  transition(1, 2) = -dt;
  const Eigen::Vector3d by(0.5 * dt * dt, dt, 0.0);
  Eigen::Matrix3d noise = 0.05 * 0.05 * by * by.transpose();
  noise(2, 2) = 1e-4 * dt;
  signal::Smoother<3> smoother(transition, a.size());
  signal::Belief<3> belief;
  belief.covariance = Eigen::Vector3d(0.1, 0.01, 0.1).asDiagonal();
  for (std::size_t i = 0; i < a.size(); ++i) {
    if (i > 0) belief = smoother.predict(belief, by * (0.5 * (a[i] + a[i - 1])), noise);
    const auto predicted = belief;
    signal::observe(belief, Eigen::Vector3d(1, 0, 0), 0.0, 0.09 * rate_hz);
    smoother.keep(predicted, belief);
  }
  std::vector<double> velocity;
  for (const auto& b : std::move(smoother).smoothed()) velocity.push_back(b.mean[1]);
  return velocity;
}

}  // namespace

// S. Y. Song, E. T. Hsiao-Wecksler et al. (2022): two IMUs with an encoder between them.
TEST_CASE("two gyros give the encoder's speed within 1.5 %, and their lag of 10 ms is found",
          "[workflow][imu]") {
  const std::string log = shared + "/open-data/two-imu-encoder/raw_roll_medium_first_120s.csv";
  if (!std::filesystem::exists(log)) {
    WARN("skipped: no open data at " + log);
    return;
  }
  const workflow::Ride by_encoder = load(log, bench_head + encoder);
  const workflow::Ride by_gyros = load(log, bench_head + "kind = \"imu_pair\"\n" + gyros);
  const motion::Agreement found =
      motion::agreement(by_encoder.ends[0].motion, by_gyros.ends[0].motion);
  CHECK(found.pair_lag_s == Approx(0.010).margin(0.004));
  CHECK(found.gain == Approx(1.0).margin(0.015));
  CHECK(found.correlation > 0.95);  // 0.9957 after low-passing (NOTICE); here nothing is smoothed

  const workflow::Ride both = load(log, bench_head + encoder + "[front.sensor.imu]\n" + gyros);
  std::string notes;
  for (const std::string& note : both.notes) notes += note + "\n";
  CHECK_THAT(notes, Catch::Matchers::Contains("ms behind the potentiometer; taken out"));
}

// D. Laidig, M. Caruso, A. Cereatti, T. Seel, Data 6(7) (2021): orientation and truth are optical,
// both velocities between 0.3 and 20 Hz as in the data set's own reference figure.
TEST_CASE("integrated acceleration is within 0.020 m/s of optical velocity", "[workflow][imu]") {
  const std::string path = shared + "/open-data/broad-imu-optical/15_excerpt_33s.csv";
  if (!std::filesystem::exists(path)) {
    WARN("skipped: no open data at " + path);
    return;
  }
  std::ifstream file(path);
  std::string line;
  std::getline(file, line);
  std::array<std::vector<double>, 3> acceleration, place;
  std::vector<double> moves;
  while (std::getline(file, line)) {
    std::replace(line.begin(), line.end(), ',', ' ');
    std::istringstream words(line);
    std::array<double, 15> v{};
    for (double& one : v) words >> one;
    const Eigen::Quaterniond turn(v[10], v[11], v[12], v[13]);
    const Eigen::Vector3d a = turn * Eigen::Vector3d(v[1], v[2], v[3]) -
                              Eigen::Vector3d(0, 0, core::standard_gravity_m_s2);
    for (std::size_t c = 0; c < 3; ++c) {
      acceleration[c].push_back(a[static_cast<Eigen::Index>(c)]);
      place[c].push_back(v[7 + c]);
    }
    moves.push_back(v[14]);
  }
  const double rate_hz = 2000.0 / 7.0;
  for (std::size_t c = 0; c < 3; ++c) {
    const auto truth = banded(
        signal::filtered({.span = 7, .degree = 3, .derivative = 1, .interval_s = 1.0 / rate_hz},
                         place[c]),
        rate_hz);
    const auto found = banded(integrated(acceleration[c], rate_hz), rate_hz);
    double errors = 0.0, squares = 0.0, count = 0.0;
    for (std::size_t i = 0; i < truth.size(); ++i) {
      if (moves[i] < 0.5 || i + 300 > truth.size()) continue;
      errors += std::pow(found[i] - truth[i], 2);
      squares += truth[i] * truth[i];
      count += 1.0;
    }
    CAPTURE(c, std::sqrt(squares / count));
    CHECK(std::sqrt(errors / count) < 0.020);
  }
}
