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
};

std::vector<Wanted> wanted_columns(const bike::Bike& bike) {
  std::vector<Wanted> wanted;
  if (bike.log.time) wanted.push_back({bike.log.time->column, ColumnKind::time});
  if (bike.front) wanted.push_back({bike.front->sensor.column, ColumnKind::front});
  if (bike.rear) wanted.push_back({bike.rear->sensor.column, ColumnKind::rear});
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
    place = LogColumn{fmt::format("column {}", w.ref.number), w.kind};
  }
  auto free = at.begin();
  const auto put = [&](LogColumn column) {
    free = std::find(free, at.end(), std::nullopt);
    *free = std::move(column);
  };
  for (const auto& w : wanted)
    if (w.ref.number <= 0) put({w.ref.name, w.kind});
  for (const auto& name : plan.extra_columns) put({name, ColumnKind::extra});

  LogLayout layout;
  layout.header = named || wanted.empty();
  for (auto& column : at) layout.columns.push_back(column.value_or(LogColumn{"spare"}));
  return layout;
}

}  // namespace clickwise::sim
