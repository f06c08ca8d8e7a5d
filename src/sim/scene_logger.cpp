#include <array>

#include "scene_readers.hpp"

namespace clickwise::sim {

namespace {

using run::FaultKind;

constexpr io::Limits moments_s{.least = 0.0, .most = 1e5, .example = 30.0};
constexpr io::Limits stretches_s{.least = 0.0, .most = 1e4, .ends_excluded = true, .example = 0.5};

constexpr std::array all_kinds{FaultKind::gap,      FaultKind::time_restart, FaultKind::spike,
                               FaultKind::stuck,    FaultKind::saturated,    FaultKind::missing,
                               FaultKind::truncated};

FaultKind read_kind(const io::TomlTable& fault) {
  std::vector<std::string_view> words;
  for (const auto kind : all_kinds) words.push_back(run::to_string(kind));
  const std::string word = fault.need_choice("kind", words);
  for (const auto kind : all_kinds)
    if (word == run::to_string(kind)) return kind;
  return FaultKind::gap;
}

PlannedFault read_fault(const io::TomlTable& table) {
  PlannedFault fault;
  fault.kind = read_kind(table);
  fault.at_s = table.need_number("at_s", moments_s);
  const bool moment = fault.kind == FaultKind::spike || fault.kind == FaultKind::time_restart ||
                      fault.kind == FaultKind::truncated;
  const bool whole_log = fault.kind == FaultKind::gap || fault.kind == FaultKind::time_restart ||
                         fault.kind == FaultKind::truncated;
  if (!moment) fault.seconds = table.need_number("seconds", stretches_s);
  if (!whole_log) fault.channel = table.need_text("column", "fork_adc");
  if (fault.kind == FaultKind::spike)
    fault.counts = table.number_or("counts", fault.counts, {.least = -1e9, .most = 1e9});
  return fault;
}

std::vector<std::string> read_names(const io::TomlTable& logger, std::string_view key) {
  std::vector<std::string> names;
  if (const auto list = logger.find(key))
    for (const auto& item : list->items()) names.push_back(item.text());
  return names;
}

SprungAccelPlan read_accel(const io::TomlTable& table) {
  SprungAccelPlan plan;
  plan.noise_g = table.number_or("noise_g", plan.noise_g, {.least = 0.0, .most = 100.0});
  plan.bias_g = table.number_or("bias_g", plan.bias_g, {.least = -10.0, .most = 10.0});
  plan.range_g =
      table.number_or("range_g", plan.range_g, {.least = 1.0, .most = 1e4, .example = 16.0});
  plan.decimals = static_cast<int>(table.integer("decimals", 1, 9).value_or(plan.decimals));
  return plan;
}

double at_least_0(const io::TomlTable& table, const char* key, double otherwise, double most) {
  return table.number_or(key, otherwise, {.least = 0.0, .most = most, .example = otherwise});
}

ImuPlan read_imu(const io::TomlTable& table) {
  ImuPlan plan;
  plan.noise_ug_sqrt_hz = at_least_0(table, "noise_ug_sqrt_hz", plan.noise_ug_sqrt_hz, 1e5);
  plan.gyro_noise_deg_s_sqrt_hz =
      at_least_0(table, "gyro_noise_deg_s_sqrt_hz", plan.gyro_noise_deg_s_sqrt_hz, 10.0);
  plan.bias_mg = at_least_0(table, "bias_mg", plan.bias_mg, 1000.0);
  plan.gyro_bias_deg_s = at_least_0(table, "gyro_bias_deg_s", plan.gyro_bias_deg_s, 50.0);
  plan.range_g = table.number_or("range_g", plan.range_g, {.least = 1.0, .most = 5000.0});
  plan.gyro_range_deg_s =
      table.number_or("gyro_range_deg_s", plan.gyro_range_deg_s, {.least = 10.0, .most = 1e5});
  plan.mounting_deg = at_least_0(table, "mounting_deg", plan.mounting_deg, 45.0);
  plan.rate_hz = at_least_0(table, "rate_hz", plan.rate_hz, 2e4);
  plan.lag_ms = at_least_0(table, "lag_ms", plan.lag_ms, 1000.0);
  plan.lower_drift_ppm =
      table.number_or("lower_drift_ppm", 0.0, {.least = -1e4, .most = 1e4, .example = 200.0});
  plan.decimals = static_cast<int>(table.integer("decimals", 0, 9).value_or(plan.decimals));
  return plan;
}

}  // namespace

LoggerPlan read_logger(const io::TomlTable& logger) {
  LoggerPlan plan;
  plan.rate_hz =
      logger.number_or("rate_hz", plan.rate_hz, {.least = 10.0, .most = 2e4, .example = 1000.0});
  plan.adc_bits = static_cast<int>(logger.integer("adc_bits", 4, 32).value_or(plan.adc_bits));
  plan.noise_counts =
      logger.number_or("noise_counts", 0.0, {.least = 0.0, .most = 1e6, .example = 1.5});
  plan.jitter = logger.number_or("jitter", 0.0, {.least = 0.0, .most = 0.49, .example = 0.05});
  plan.time_decimals = static_cast<int>(logger.integer("time_decimals", 0, 9).value_or(0));
  plan.clock_start =
      logger.number_or("clock_start", 0.0, {.least = 0.0, .most = 1e15, .example = 4.29e9});
  plan.wrap_u32 = logger.boolean("wrap_u32").value_or(false);
  if (const auto accel = logger.table("accel")) plan.sprung_accel = read_accel(*accel);
  plan.extra_columns = read_names(logger, "extra_columns");
  plan.extra_decimals = static_cast<int>(logger.integer("extra_decimals", 0, 9).value_or(0));
  if (const auto imu = logger.table("imu")) plan.imu = read_imu(*imu);
  for (const auto& fault : logger.tables("fault")) plan.faults.push_back(read_fault(fault));
  return plan;
}

}  // namespace clickwise::sim
