#include "clickwise/sim/logger.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/errors.hpp"
#include "log_cells.hpp"
#include "log_layout.hpp"

namespace clickwise::sim {

namespace {

constexpr std::size_t piece_bytes = 1 << 18;

// Streams of the logger's seed: the clock, then one a column.
constexpr std::uint64_t clock_stream = 1;
constexpr std::uint64_t first_column_stream = 16;

bool is_of_whole_log(run::FaultKind kind) {
  return kind == run::FaultKind::gap || kind == run::FaultKind::time_restart ||
         kind == run::FaultKind::truncated;
}

void require_known_channels(const bike::Bike& bike, const LoggerPlan& plan,
                            const LogLayout& layout) {
  for (const auto& fault : plan.faults) {
    if (is_of_whole_log(fault.kind)) continue;
    const bool known =
        std::any_of(layout.columns.begin(), layout.columns.end(), [&](const LogColumn& column) {
          return column.name == fault.channel && column.kind != ColumnKind::time;
        });
    if (!known)
      throw core::JobError(
          {bike.file, 0, 0},
          fmt::format("a planned {} names the column \"{}\", which the log does not have",
                      run::to_string(fault.kind), fault.channel),
          "name a reading's column of the bike file's");
  }
}

// When each row is sampled and stamped, and which rows there are.
class Clock {
public:
  explicit Clock(const LoggerPlan& plan) : plan_(plan), chance_(plan.seed, clock_stream) {
    for (const auto& fault : plan.faults)
      if (fault.kind == run::FaultKind::truncated) cut_s_ = std::min(cut_s_, fault.at_s);
  }

  LogRow row(std::size_t i) {
    const double early = plan_.jitter * (2.0 * chance_.uniform() - 1.0);
    LogRow row;
    row.sampled_s = std::max(0.0, static_cast<double>(i) + early) / plan_.rate_hz;
    row.clock_s = row.sampled_s;
    for (const auto& fault : plan_.faults)
      if (fault.kind == run::FaultKind::time_restart && row.sampled_s >= fault.at_s)
        row.clock_s = std::min(row.clock_s, row.sampled_s - fault.at_s);
    return row;
  }

  bool left_out(const LogRow& row) const {
    return std::any_of(plan_.faults.begin(), plan_.faults.end(), [&](const PlannedFault& fault) {
      return fault.kind == run::FaultKind::gap && row.sampled_s >= fault.at_s &&
             row.sampled_s < fault.at_s + fault.seconds;
    });
  }

  bool cut(const LogRow& row) const { return row.sampled_s >= cut_s_; }

private:
  const LoggerPlan& plan_;
  Random chance_;
  double cut_s_ = std::numeric_limits<double>::infinity();
};

void append_line(std::string& text, std::vector<LogCells>& cells, const LogRow& row) {
  for (std::size_t c = 0; c < cells.size(); ++c) {
    if (c > 0) text += ',';
    cells[c].append(text, row);
  }
  text += '\n';
}

// RFC 4180, section 2, items 5 to 7.
std::string quoted(const std::string& name) {
  if (name.find_first_of(",\"\r\n") == std::string::npos) return name;
  std::string out = "\"";
  for (const char c : name) out.append(c == '"' ? 2 : 1, c);
  return out + '"';
}

void append_header(std::string& text, const LogLayout& layout) {
  for (std::size_t c = 0; c < layout.columns.size(); ++c) {
    if (c > 0) text += ',';
    text += quoted(layout.columns[c].name);
  }
  text += '\n';
}

}  // namespace

core::Polyline readings_over_travel(const bike::Potentiometer& sensor) {
  std::vector<double> travel = sensor.travel_m.y();
  std::vector<double> readings = sensor.travel_m.x();
  if (travel.front() > travel.back()) {
    std::reverse(travel.begin(), travel.end());
    std::reverse(readings.begin(), readings.end());
  }
  return {std::move(travel), std::move(readings)};
}

void write_log(const bike::Bike& bike, const LoggerPlan& plan, const Truth& truth,
               const std::function<void(std::string_view)>& sink) {
  const LogLayout layout = lay_out(bike, plan);
  require_known_channels(bike, plan, layout);
  if (truth.samples() < 2)
    throw core::JobError({bike.file, 0, 0}, "the ride is shorter than two samples",
                         "make it longer");
  const ImuUnits units(bike, plan, truth);
  std::vector<LogCells> cells;
  for (std::size_t c = 0; c < layout.columns.size(); ++c)
    cells.emplace_back(bike, plan, truth, units, layout.columns[c], first_column_stream + c);

  std::string text;
  if (layout.header) append_header(text, layout);
  Clock clock(plan);
  const double seconds = static_cast<double>(truth.samples() - 1) / truth.rate_hz;
  const auto rows = static_cast<std::size_t>(seconds * plan.rate_hz + 1e-6) + 1;
  for (std::size_t i = 0; i < rows; ++i) {
    const LogRow row = clock.row(i);
    if (clock.left_out(row)) continue;
    const std::size_t before = text.size();
    append_line(text, cells, row);
    if (clock.cut(row)) {
      text.resize(before + std::max<std::size_t>(1, (text.size() - before) / 2));
      break;
    }
    if (text.size() >= piece_bytes) {
      sink(text);
      text.clear();
    }
  }
  sink(text);
}

}  // namespace clickwise::sim
