// What a pair's readings say against the bike file, and the lag between its units.
#include <fmt/format.h>

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"
#include "imu_series.hpp"

namespace clickwise::motion {

namespace {

using Eigen::Vector3d;

constexpr double half_g = 0.5 * core::standard_gravity_m_s2;
constexpr double least_usable = 0.05;  // share of the log: below it a unit gave nothing
constexpr double plausible_rms_rad_s = 12.0;
constexpr double dull_rms_rad_s = 0.012;  // a ridden bike turns more

double usable_share(const UnitSeries& unit) {
  double sum = 0.0;
  for (const auto one : unit.usable) sum += one;
  return sum / std::max<double>(1.0, static_cast<double>(unit.usable.size()));
}

Vector3d mean_of(const std::vector<Vector3d>& series, const std::vector<std::uint8_t>& usable) {
  Vector3d sum = Vector3d::Zero();
  double count = 0.0;
  for (std::size_t i = 0; i < series.size(); ++i)
    if (usable[i]) {
      sum += series[i];
      count += 1.0;
    }
  return sum / std::max(1.0, count);
}

double rms_about(const std::vector<Vector3d>& series, const std::vector<std::uint8_t>& usable,
                 const Vector3d& middle) {
  double sum = 0.0;
  double count = 0.0;
  for (std::size_t i = 0; i < series.size(); ++i)
    if (usable[i]) {
      sum += (series[i] - middle).squaredNorm();
      count += 1.0;
    }
  return std::sqrt(sum / std::max(1.0, count));
}

// Gravity is what the mean of a long ride shows. A wheel's unit clips, so the upper one speaks.
std::string wrong_gravity(const UnitSeries& unit, const Vector3d& axis) {
  const Vector3d mean = mean_of(unit.accel, unit.usable);
  const double size = mean.norm() / core::standard_gravity_m_s2;
  const auto near = [&](double factor) { return size > 0.6 * factor && size < 1.6 * factor; };
  if (near(core::standard_gravity_m_s2))
    return fmt::format(
        "the {} unit shows gravity as {:.3g} g: its readings are in m/s2, so write "
        "accel_unit = \"m/s2\"",
        unit.name, size);
  if (near(1.0 / core::standard_gravity_m_s2))
    return fmt::format(
        "the {} unit shows gravity as {:.3g} g: its readings are in g, so write "
        "accel_unit = \"g\"",
        unit.name, size);
  if (!near(1.0))
    return fmt::format("the {} unit shows gravity as {:.3g} g; check accel_unit and the columns",
                       unit.name, size);
  if (mean.dot(axis) < -half_g)
    return fmt::format(
        "gravity pulls along the axis of the {} unit, not against it: the axis is "
        "reversed, so turn the signs of axis",
        unit.name);
  if (mean.dot(axis) < half_g)
    return fmt::format(
        "the axis of the {} unit lies across gravity; check axis and the columns' "
        "order",
        unit.name);
  return {};
}

double turning_rms(const UnitSeries& unit) {
  return unit.gyro.empty() ? 0.0
                           : rms_about(unit.gyro, unit.usable, mean_of(unit.gyro, unit.usable));
}

// Both gyros have one unit, so the livelier one speaks: a frame may stand on a bench.
std::string wrong_gyro(const PairSeries& series) {
  if (series.upper.gyro.empty()) return {};
  const double rms = std::max(turning_rms(series.upper), turning_rms(series.lower));
  if (rms > plausible_rms_rad_s)
    return fmt::format(
        "its gyros turn by {:.3g} rad/s rms, which no bike does: their readings are in deg/s, so "
        "write gyro_unit = \"deg/s\"",
        rms);
  if (rms < dull_rms_rad_s)
    return fmt::format(
        "its gyros turn by {:.2g} deg/s rms, less than a ridden bike: their readings are in rad/s, "
        "so write gyro_unit = \"rad/s\"",
        rms / core::radians_per_degree);
  return {};
}

// The wheel's unit is shaken harder than the frame's.
std::string swapped(const PairSeries& series, const Vector3d& axis) {
  const auto roughness = [&](const UnitSeries& unit) {
    double sum = 0.0;
    for (std::size_t i = 1; i < unit.accel.size(); ++i)
      if (unit.usable[i] && unit.usable[i - 1])
        sum += std::pow(axis.dot(unit.accel[i] - unit.accel[i - 1]), 2);
    return sum;
  };
  if (roughness(series.upper) < 2.0 * roughness(series.lower)) return {};
  return "the upper unit is shaken harder than the lower one: the two are swapped, so exchange "
         "upper and lower";
}

}  // namespace

std::string contradiction(const PairSeries& series, const bike::End& end) {
  const bike::ImuPair& pair = *end.imu;
  const Vector3d axis(pair.axis.data());
  for (const UnitSeries* unit : {&series.upper, &series.lower})
    if (usable_share(*unit) < least_usable)
      return fmt::format("the {} unit gives no readings; check its plug and its columns",
                         unit->name);
  if (!pair.swinging()) {
    if (const auto wrong = wrong_gravity(series.upper, axis); !wrong.empty()) return wrong;
    if (const auto wrong = wrong_gravity(series.lower, axis); !wrong.empty()) return wrong;
    if (const auto wrong = swapped(series, axis); !wrong.empty()) return wrong;
  }
  return wrong_gyro(series);
}

}  // namespace clickwise::motion
