#include "imu_cells.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"

namespace clickwise::sim {

namespace {

constexpr double micro_g = 1e-6 * core::standard_gravity_m_s2;
constexpr double milli_g = 1e-3 * core::standard_gravity_m_s2;

// Sampled noise of a one-sided density: check-values 8i (IEEE Std 952-1997).
double sampled_noise(double density, double rate_hz) {
  return density * std::sqrt(0.5 * rate_hz);
}

double unit_of(const bike::Bike& bike, const LogColumn& column) {
  if (column.kind == ColumnKind::hand) return bike.hand_accel->metres_per_second2_per_unit;
  const bike::ImuPair& pair = *bike.end(column.imu.end)->imu;
  return column.imu.gyro ? pair.radians_per_second_per_unit : pair.metres_per_second2_per_unit;
}

}  // namespace

ImuUnits::ImuUnits(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth) {
  for (const bike::EndName name : bike::both_ends)
    if (bike.end(name) && bike.end(name)->imu)
      pairs_.emplace(name, imu_signals(bike, name, plan.imu, plan.seed, truth));
  if (bike.hand_accel) bar_ = bar_signals(bike, plan.seed, truth);
}

const std::vector<Eigen::Vector3d>& ImuUnits::signal(const LogColumn& column) const {
  if (column.kind == ColumnKind::hand) return bar_.accel_m_s2;
  const ImuPairSignals& pair = pairs_.at(column.imu.end);
  const ImuSignals& unit = column.imu.lower ? pair.lower : pair.upper;
  return column.imu.gyro ? unit.gyro_rad_s : unit.accel_m_s2;
}

ImuChannel::ImuChannel(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
                       const ImuUnits& units, const LogColumn& column, Random& chance)
    : plan_(plan.imu),
      signal_(units.signal(column)),
      component_(column.imu.component),
      rate_hz_(truth.rate_hz),
      unit_rate_hz_(plan.imu.rate_hz > 0.0 ? std::min(plan.imu.rate_hz, plan.rate_hz)
                                           : plan.rate_hz),
      si_per_unit_(unit_of(bike, column)) {
  const bool gyro = column.kind == ColumnKind::imu && column.imu.gyro;
  const double sign = chance.uniform() < 0.5 ? -1.0 : 1.0;
  bias_ =
      sign * (gyro ? plan_.gyro_bias_deg_s * core::radians_per_degree : plan_.bias_mg * milli_g);
  noise_ = sampled_noise(gyro ? plan_.gyro_noise_deg_s_sqrt_hz * core::radians_per_degree
                              : plan_.noise_ug_sqrt_hz * micro_g,
                         unit_rate_hz_);
  range_ = gyro ? plan_.gyro_range_deg_s * core::radians_per_degree
                : plan_.range_g * core::standard_gravity_m_s2;
  if (column.imu.lower) drift_ = 1e-6 * plan_.lower_drift_ppm;
}

double ImuChannel::mean_around(double t_s) const {
  const double half = 0.5 * (rate_hz_ / unit_rate_hz_ - 1.0);
  const double centre = t_s * rate_hz_;
  const double last = static_cast<double>(signal_.size() - 1);
  double sum = 0.0;
  int count = 0;
  for (double place = centre - half; place <= centre + half + 1e-9; place += 1.0, ++count) {
    const double u = std::clamp(place, 0.0, last);
    const auto i = std::min(static_cast<std::size_t>(u), signal_.size() - 2);
    const auto c = static_cast<Eigen::Index>(component_);
    sum += signal_[i][c] + (u - static_cast<double>(i)) * (signal_[i + 1][c] - signal_[i][c]);
  }
  return sum / count;
}

std::optional<double> ImuChannel::reading(double t_s, Random& chance) {
  const auto turn = static_cast<long long>(std::floor(t_s * unit_rate_hz_ + 1e-6));
  if (unit_rate_hz_ < 0.999 * rate_hz_ && turn == last_turn_) return std::nullopt;
  last_turn_ = turn;
  const double sampled_s = (t_s - plan_.lag_ms * core::seconds_per_ms) * (1.0 + drift_);
  const double value = mean_around(sampled_s) + bias_ + noise_ * chance.normal();
  return std::clamp(value, -range_, range_) / si_per_unit_;
}

}  // namespace clickwise::sim
