// The readings of one inertial channel of the invented log.
#pragma once

#include <map>
#include <optional>

#include "clickwise/sim/random.hpp"
#include "imu_signals.hpp"
#include "log_layout.hpp"

namespace clickwise::sim {

// The units of a whole log, worked out once.
class ImuUnits {
public:
  ImuUnits(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth);

  const std::vector<Eigen::Vector3d>& signal(const LogColumn& column) const;

private:
  std::map<bike::EndName, ImuPairSignals> pairs_;
  ImuSignals bar_;
};

// One channel: mean over the unit's sampling interval, bias, noise, range, units.
class ImuChannel {
public:
  // The arguments must outlive this object.
  ImuChannel(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
             const ImuUnits& units, const LogColumn& column, Random& chance);

  // The reading of a row sampled at t_s, in the bike file's unit; nothing where the unit's own,
  // slower sampling has none for this row.
  std::optional<double> reading(double t_s, Random& chance);

private:
  double mean_around(double t_s) const;

  const ImuPlan& plan_;
  const std::vector<Eigen::Vector3d>& signal_;
  std::size_t component_;
  double rate_hz_;       // of the signal
  double unit_rate_hz_;  // of the unit
  double drift_ = 0.0;
  double bias_, noise_, range_;  // SI
  double si_per_unit_;
  long long last_turn_ = -1;
};

}  // namespace clickwise::sim
