// The cells of one column of the invented log, row by row.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/sim/logger.hpp"
#include "clickwise/sim/random.hpp"
#include "imu_cells.hpp"
#include "log_layout.hpp"

namespace clickwise::sim {

// One row's moment: what the clock is stamped with counts from the log's first sample.
struct LogRow {
  double sampled_s = 0.0;  // when the readings were taken
  double clock_s = 0.0;    // what the clock says
};

class LogCells {
public:
  // The arguments must outlive this object.
  LogCells(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
           const ImuUnits& units, const LogColumn& column, std::uint64_t stream);

  // Appends the cell's text; nothing while the reading is missing.
  void append(std::string& text, const LogRow& row);

private:
  std::optional<double> reading(const LogRow& row);
  double felt_reading(bike::EndName name, double t_s);
  double full_reading() const;
  std::optional<double> damaged(double reading, double at_s);

  const bike::Bike& bike_;
  const LoggerPlan& plan_;
  const Truth& truth_;
  ColumnKind kind_;
  core::Polyline readings_;  // over travel; of a sensor's column
  std::vector<PlannedFault> faults_;
  std::vector<bool> struck_;     // spikes that were given
  std::optional<double> stuck_;  // the reading that is held
  Random chance_;
  double wander_ = 0.0;
  std::optional<ImuChannel> imu_;
};

}  // namespace clickwise::sim
