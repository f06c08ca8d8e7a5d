#include "log_cells.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <utility>

#include "clickwise/core/units.hpp"

namespace clickwise::sim {

namespace {

constexpr double u32_range = 4294967296.0;

void append_number(std::string& text, double value, int decimals) {
  char buffer[64];
  const auto end =
      decimals > 0
          ? std::to_chars(buffer, buffer + sizeof buffer, value, std::chars_format::fixed, decimals)
          : std::to_chars(buffer, buffer + sizeof buffer, std::llround(value));
  text.append(buffer, end.ptr);
}

// Between two samples: the cubic with their travels and velocities.
double travel_at(const EndTruth& end, double rate_hz, double t_s) {
  const double last = static_cast<double>(end.travel_m.size() - 1);
  const double u = std::clamp(t_s * rate_hz, 0.0, last);
  const auto i = std::min(static_cast<std::size_t>(u), end.travel_m.size() - 2);
  const double w = u - static_cast<double>(i);
  const double a = end.travel_m[i];
  const double rise = end.travel_m[i + 1] - a;
  const double va = end.velocity_m_s[i] / rate_hz;
  const double vb = end.velocity_m_s[i + 1] / rate_hz;
  return a + w * (va + w * (3.0 * rise - 2.0 * va - vb + w * (va + vb - 2.0 * rise)));
}

bool within(const PlannedFault& fault, double at_s) {
  return at_s >= fault.at_s && at_s < fault.at_s + fault.seconds;
}

constexpr int speed_decimals = 2;

int decimals_of(ColumnKind kind, const LoggerPlan& plan) {
  switch (kind) {
    case ColumnKind::time:
      return plan.time_decimals;
    case ColumnKind::speed:
      return speed_decimals;
    case ColumnKind::front_accel:
    case ColumnKind::rear_accel:
      return plan.sprung_accel.decimals;
    case ColumnKind::extra:
      return plan.extra_decimals;
    case ColumnKind::imu:
    case ColumnKind::hand:
      return plan.imu.decimals;
    default:
      return 0;
  }
}

}  // namespace

LogCells::LogCells(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
                   const ImuUnits& units, const LogColumn& column, std::uint64_t stream)
    : bike_(bike), plan_(plan), truth_(truth), kind_(column.kind), chance_(plan.seed, stream) {
  if (kind_ == ColumnKind::front) readings_ = readings_over_travel(bike.front->sensor);
  if (kind_ == ColumnKind::rear) readings_ = readings_over_travel(bike.rear->sensor);
  if (kind_ == ColumnKind::imu || kind_ == ColumnKind::hand)
    imu_.emplace(bike, plan, truth, units, column, chance_);
  std::copy_if(plan.faults.begin(), plan.faults.end(), std::back_inserter(faults_),
               [&](const PlannedFault& fault) { return fault.channel == column.name; });
  struck_.assign(faults_.size(), false);
}

double LogCells::felt_reading(bike::EndName name, double t_s) {
  const std::vector<double>& felt = truth_.end(name)->felt_m_s2;
  const double u = std::clamp(t_s * truth_.rate_hz, 0.0, static_cast<double>(felt.size() - 1));
  const auto i = std::min(static_cast<std::size_t>(u), felt.size() - 2);
  const double felt_m_s2 = felt[i] + (u - static_cast<double>(i)) * (felt[i + 1] - felt[i]);
  const SprungAccelPlan& accel = plan_.sprung_accel;
  const double felt_g = felt_m_s2 / core::standard_gravity_m_s2 + accel.bias_g +
                        (accel.noise_g > 0.0 ? accel.noise_g * chance_.normal() : 0.0);
  return std::clamp(felt_g, -accel.range_g, accel.range_g) * core::standard_gravity_m_s2 /
         bike_.end(name)->sprung_accel->m_s2_per_unit();
}

std::optional<double> LogCells::reading(const LogRow& row) {
  if (imu_) return imu_->reading(row.sampled_s, chance_);
  if (kind_ == ColumnKind::front_accel) return felt_reading(bike::EndName::front, row.sampled_s);
  if (kind_ == ColumnKind::rear_accel) return felt_reading(bike::EndName::rear, row.sampled_s);
  if (kind_ == ColumnKind::speed) {
    const auto i = static_cast<std::size_t>(row.sampled_s * truth_.rate_hz);
    const double speed = truth_.progress.speed_m_s[std::min(i, truth_.samples() - 1)];
    return speed / bike_.log.speed->metres_per_second_per_unit;
  }
  if (kind_ == ColumnKind::extra) {
    wander_ = 0.999 * wander_ + 5.0 * chance_.normal();
    return 1000.0 + wander_;
  }
  const auto name = kind_ == ColumnKind::front ? bike::EndName::front : bike::EndName::rear;
  const double travel = travel_at(*truth_.end(name), truth_.rate_hz, row.sampled_s);
  return readings_(travel) + plan_.noise_counts * chance_.normal();
}

double LogCells::full_reading() const {
  for (const auto& [kind, name] : {std::pair{ColumnKind::front_accel, bike::EndName::front},
                                   std::pair{ColumnKind::rear_accel, bike::EndName::rear}})
    if (kind_ == kind)
      return plan_.sprung_accel.range_g * core::standard_gravity_m_s2 /
             std::abs(bike_.end(name)->sprung_accel->m_s2_per_unit());
  return std::exp2(plan_.adc_bits) - 1.0;
}

std::optional<double> LogCells::damaged(double reading, double at_s) {
  const double full = full_reading();
  const bool converted = decimals_of(kind_, plan_) == 0 && !imu_;
  double value = converted ? std::clamp(std::round(reading), 0.0, full) : reading;
  bool stuck = false;
  for (std::size_t i = 0; i < faults_.size(); ++i) {
    const PlannedFault& fault = faults_[i];
    if (fault.kind == run::FaultKind::missing && within(fault, at_s)) return std::nullopt;
    if (fault.kind == run::FaultKind::saturated && within(fault, at_s)) value = full;
    if (fault.kind == run::FaultKind::stuck && within(fault, at_s)) {
      stuck = true;
      value = stuck_.value_or(value);
    }
    if (fault.kind == run::FaultKind::spike && !struck_[i] && at_s >= fault.at_s) {
      struck_[i] = true;
      value = std::clamp(value + fault.counts, 0.0, full);
    }
  }
  stuck_ = stuck ? std::optional(value) : std::nullopt;
  return value;
}

void LogCells::append(std::string& text, const LogRow& row) {
  if (kind_ == ColumnKind::time) {
    double stamp = plan_.clock_start + row.clock_s / bike_.log.time->seconds_per_unit;
    if (plan_.wrap_u32) stamp = std::fmod(stamp, u32_range);
    append_number(text, stamp, decimals_of(kind_, plan_));
    return;
  }
  const auto read = reading(row);
  if (!read) return;
  const auto value = damaged(*read, row.sampled_s);
  if (!value) return;
  append_number(text, *value, decimals_of(kind_, plan_));
}

}  // namespace clickwise::sim
