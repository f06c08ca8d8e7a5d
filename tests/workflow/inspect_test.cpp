#include "clickwise/workflow/inspect.hpp"

#include <fmt/format.h>
#include <catch2/catch.hpp>
#include <cmath>

#include "support/log_file.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

// Two units at 200 Hz: gravity along z in the given unit, turning by half a radian a second rms in
// the given unit, and a fork sensor of 12 bits.
std::string imu_log(double one_g, double per_rad_s, const std::string& gyro = "gyro") {
  std::string text = "t_ms,fork_adc";
  for (const char* unit : {"upper", "lower"})
    for (const std::string& sensor : {std::string("acc"), gyro})
      for (const char axis : {'x', 'y', 'z'}) text += fmt::format(",{}_{}_{}", unit, sensor, axis);
  text += "\n";
  for (int i = 0; i < 2000; ++i) {
    const double wave = std::sin(0.05 * i);
    text += fmt::format("{},{}", 5 * i, 1000 + static_cast<int>(700 * wave));
    for (int unit = 0; unit < 2; ++unit)
      text += fmt::format(",{:.4f},{:.4f},{:.4f},{:.4f},{:.4f},{:.4f}", 0.2 * one_g * wave,
                          0.1 * one_g, one_g * (0.98 + 0.3 * wave), 0.7 * per_rad_s * wave, 0.0,
                          0.1 * per_rad_s * wave);
    text += "\n";
  }
  return text;
}

std::string starter_of(const std::string& text) {
  const test::LogFile file(text);
  return workflow::inspect(file.path(), "").starter_bike;
}

constexpr double g_m_s2 = 9.80665;
constexpr double deg_per_rad = 57.29578;

}  // namespace

TEST_CASE("an IMU's units follow from the size of gravity and of the turning", "[workflow]") {
  const std::string in_g = starter_of(imu_log(1.0, deg_per_rad));
  CHECK_THAT(in_g, Contains("# accel_unit = \"g\"") && Contains("# gyro_unit = \"deg/s\""));
  const std::string in_si = starter_of(imu_log(g_m_s2, 1.0));
  CHECK_THAT(in_si, Contains("# accel_unit = \"m/s2\"") && Contains("# gyro_unit = \"rad/s\""));
  const std::string in_counts = starter_of(imu_log(2048.0, 1.0));
  CHECK_THAT(in_counts, Contains("# accel_unit = \"?\"") && Contains("neither g nor m/s2"));
}

TEST_CASE("a pair of IMUs is offered whole, in comments, beside the fork's counts", "[workflow]") {
  const std::string starter = starter_of(imu_log(1.0, deg_per_rad));
  CHECK_THAT(starter, Contains("# kind = \"imu_pair\""));
  CHECK_THAT(starter,
             Contains("# upper = { accel = [\"upper_acc_x\", \"upper_acc_y\", \"upper_acc_z\"], "
                      "gyro = [\"upper_gyro_x\", \"upper_gyro_y\", \"upper_gyro_z\"] }"));
  CHECK_THAT(starter, Contains("# lower = { accel = [\"lower_acc_x\""));
  CHECK_THAT(starter, Contains("column = \"fork_adc\"   # reads 301 to 1699 in this log: counts of "
                               "a converter of 12 bits"));
  CHECK_THAT(starter, !Contains("also numeric: upper"));
  CHECK_THAT(starter_of("t_ms,fork_mm\n0,1.5\n1,2.5\n2,1.5\n3,2.5\n"),
             !Contains("imu_pair") && !Contains("converter of"));
}
