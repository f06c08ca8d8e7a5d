#include "log_layout.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <optional>

#include "clickwise/core/errors.hpp"

namespace clickwise::sim {

namespace {

struct Wanted {
  bike::ColumnRef ref;
  ColumnKind kind;
  ImuColumn imu = {};
};

void want_three(std::vector<Wanted>& wanted, const bike::ThreeColumns& columns, ColumnKind kind,
                ImuColumn imu) {
  for (imu.component = 0; imu.component < 3; ++imu.component)
    wanted.push_back({columns[imu.component], kind, imu});
}

void want_pair(std::vector<Wanted>& wanted, const bike::Bike& bike, bike::EndName name) {
  if (!bike.end(name) || !bike.end(name)->imu) return;
  for (const bool lower : {false, true}) {
    const bike::ImuUnit& unit = lower ? bike.end(name)->imu->lower : bike.end(name)->imu->upper;
    if (unit.accel) want_three(wanted, *unit.accel, ColumnKind::imu, {name, lower, false});
    if (unit.gyro) want_three(wanted, *unit.gyro, ColumnKind::imu, {name, lower, true});
  }
}

std::vector<Wanted> wanted_columns(const bike::Bike& bike) {
  std::vector<Wanted> wanted;
  if (bike.log.time) wanted.push_back({bike.log.time->column, ColumnKind::time});
  if (bike.front && bike.front->has_potentiometer())
    wanted.push_back({bike.front->sensor.column, ColumnKind::front});
  if (bike.rear && bike.rear->has_potentiometer())
    wanted.push_back({bike.rear->sensor.column, ColumnKind::rear});
  for (const bike::EndName name : bike::both_ends) want_pair(wanted, bike, name);
  if (bike.hand_accel) want_three(wanted, bike.hand_accel->columns, ColumnKind::hand, {});
  if (bike.log.speed) wanted.push_back({bike.log.speed->column, ColumnKind::speed});
  if (bike.front && bike.front->sprung_accel)
    wanted.push_back({bike.front->sprung_accel->column, ColumnKind::front_accel});
  if (bike.rear && bike.rear->sprung_accel)
    wanted.push_back({bike.rear->sprung_accel->column, ColumnKind::rear_accel});
  return wanted;
}

}  // namespace

LogLayout lay_out(const bike::Bike& bike, const LoggerPlan& plan) {
  const auto wanted = wanted_columns(bike);
  const bool named =
      std::any_of(wanted.begin(), wanted.end(), [](const Wanted& w) { return w.ref.number <= 0; });
  std::size_t places = wanted.size() + plan.extra_columns.size();
  for (const auto& w : wanted)
    places = std::max(places, static_cast<std::size_t>(std::max(0, w.ref.number)));

  std::vector<std::optional<LogColumn>> at(places);
  for (const auto& w : wanted) {
    if (w.ref.number <= 0) continue;
    auto& place = at[static_cast<std::size_t>(w.ref.number) - 1];
    if (place)
      throw core::JobError({bike.file, 0, 0},
                           fmt::format("two readings want column {}", w.ref.number),
                           "give each a column of its own");
    place = LogColumn{fmt::format("column {}", w.ref.number), w.kind, w.imu};
  }
  auto free = at.begin();
  const auto put = [&](LogColumn column) {
    free = std::find(free, at.end(), std::nullopt);
    *free = std::move(column);
  };
  for (const auto& w : wanted)
    if (w.ref.number <= 0) put({w.ref.name, w.kind, w.imu});
  for (const auto& name : plan.extra_columns) put({name, ColumnKind::extra, {}});

  LogLayout layout;
  layout.header = named || wanted.empty();
  for (auto& column : at)
    layout.columns.push_back(column.value_or(LogColumn{"spare", ColumnKind::extra, {}}));
  return layout;
}

}  // namespace clickwise::sim
