#include "end_motion.hpp"

#include <fmt/format.h>

#include "clickwise/motion/second_opinion.hpp"

namespace clickwise::workflow {

namespace {

std::size_t add_three(ColumnPlan& plan, const std::string& key, const bike::ThreeColumns& columns) {
  const std::size_t first = plan.columns.size() - plan.first_unit;
  for (const bike::ColumnRef& column : columns) plan.columns.push_back({key, column});
  return first;
}

motion::UnitChannels add_unit(ColumnPlan& plan, const std::string& key, const bike::ImuUnit& unit) {
  motion::UnitChannels channels;
  if (unit.accel) channels.accel = add_three(plan, key + ".accel", *unit.accel);
  if (unit.gyro) channels.gyro = add_three(plan, key + ".gyro", *unit.gyro);
  return channels;
}

EndMotion of(motion::PotentiometerMotion&& made) {
  return {std::move(made.motion), std::move(made.faults), std::move(made.notes)};
}

EndMotion of(motion::ImuMotion&& made) {
  return {std::move(made.motion), std::move(made.faults), std::move(made.notes)};
}

void add(EndMotion& into, const run::FaultLedger& faults, const std::vector<std::string>& notes) {
  into.faults.merge(faults);
  into.notes.insert(into.notes.end(), notes.begin(), notes.end());
}

bool any_valid(const run::Motion& motion) {
  for (const auto one : motion.valid)
    if (one) return true;
  return false;
}

}  // namespace

std::vector<bike::ColumnRef> ColumnPlan::refs() const {
  std::vector<bike::ColumnRef> out;
  for (const NamedColumn& one : columns) out.push_back(one.column);
  return out;
}

ColumnPlan plan_columns(const bike::Bike& bike) {
  ColumnPlan plan;
  const auto each_end = [&](auto add) {
    for (const bike::EndName name : bike::both_ends)
      if (bike.end(name))
        add(*bike.end(name), std::string(bike::to_string(name)), name == bike::EndName::front);
  };
  each_end([&](const bike::End& end, const std::string& key, bool front) {
    if (!end.has_potentiometer()) return;
    (front ? plan.front_potentiometer : plan.rear_potentiometer) = plan.columns.size();
    plan.columns.push_back({key + ".sensor", end.sensor.column});
  });
  if (bike.log.speed) {
    plan.speed = plan.columns.size();
    plan.columns.push_back({"log.speed", bike.log.speed->column});
  }
  plan.first_unit = plan.columns.size();
  each_end([&](const bike::End& end, const std::string& key, bool front) {
    if (!end.imu) return;
    motion::PairChannels pair;
    pair.upper = add_unit(plan, key + ".sensor.upper", end.imu->upper);
    pair.lower = add_unit(plan, key + ".sensor.lower", end.imu->lower);
    (front ? plan.front_pair : plan.rear_pair) = pair;
  });
  if (bike.hand_accel)
    plan.hand_accel = add_three(plan, "rider.hand_accel", bike.hand_accel->columns);
  each_end([&](const bike::End& end, const std::string& key, bool) {
    if (end.sprung_accel) plan.columns.push_back({key + ".sprung_accel", end.sprung_accel->column});
  });
  return plan;
}

EndMotion end_motion(const bike::Bike& bike, bike::EndName name, const Recordings& recordings,
                     const ColumnPlan& plan, const motion::UniformClock& clock,
                     const motion::MotionOptions& options) {
  const bike::End& end = *bike.end(name);
  const bool front = name == bike::EndName::front;
  const auto& potentiometer = front ? plan.front_potentiometer : plan.rear_potentiometer;
  const auto& pair = front ? plan.front_pair : plan.rear_pair;
  const auto mass = bike.sprung_mass_kg(name);
  if (!pair)
    return of(motion::from_potentiometer(recordings.travel, *potentiometer, end, clock, options));
  EndMotion alone = of(motion::from_imu_pair(recordings.units, *pair, end, mass, clock));
  if (!potentiometer) return alone;

  EndMotion seen =
      of(motion::from_potentiometer(recordings.travel, *potentiometer, end, clock, options));
  if (!any_valid(seen.motion)) {
    add(alone, seen.faults, seen.notes);
    alone.notes.push_back("the potentiometer gives nothing, so the IMU pair stands alone");
    return alone;
  }
  const motion::Agreement agreement = motion::agreement(seen.motion, alone.motion);
  add(seen, alone.faults, alone.notes);
  add(seen, {}, agreement.notes);
  if (!agreement.usable) {
    seen.notes.push_back("the potentiometer alone is used");
    return seen;
  }
  const run::Motion late = motion::shifted(seen.motion, -agreement.pair_lag_s);
  const motion::SecondOpinion second{&late, recordings.travel.channels[*potentiometer].name};
  EndMotion both = of(motion::from_imu_pair(recordings.units, *pair, end, mass, clock, second));
  both.motion = motion::shifted(both.motion, agreement.pair_lag_s);
  both.motion.source = run::Source::potentiometer;
  both.motion.smoothing += ", with the potentiometer's travel";
  both.faults = std::move(seen.faults);
  both.notes = std::move(seen.notes);
  return both;
}

}  // namespace clickwise::workflow
