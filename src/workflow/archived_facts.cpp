#include "archived_facts.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <filesystem>

#include "clickwise/archive/run_archive.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/core/utf8.hpp"

namespace clickwise::workflow {

namespace {

logs::ColumnFacts series_facts(const std::string& name, const std::vector<double>& values,
                               const std::vector<std::uint8_t>& valid, double si_per_unit) {
  logs::ColumnFacts facts;
  facts.name = name;
  for (std::size_t i = 0; i < values.size(); ++i) {
    if (!valid[i] || std::isnan(values[i])) continue;
    const double value = values[i] / si_per_unit;
    facts.least = facts.count == 0 ? value : std::min(facts.least, value);
    facts.most = facts.count == 0 ? value : std::max(facts.most, value);
    ++facts.count;
  }
  facts.missing = values.size() - facts.count;
  if (facts.count > 0)
    facts.kind = facts.least == facts.most ? logs::ColumnKind::constant : logs::ColumnKind::number;
  return facts;
}

void add_end(std::vector<logs::ColumnFacts>& columns, const std::string& group,
             const std::optional<archive::EndOfRun>& end) {
  if (!end) return;
  const run::Motion& motion = end->motion;
  const auto add = [&](const char* name, const std::vector<double>& values) {
    columns.push_back(series_facts(group + name, values, motion.valid, core::metres_per_mm));
  };
  add("/travel_mm", motion.travel_m);
  add("/velocity_mm_s", motion.velocity_m_s);
  add("/velocity_sigma_mm_s", motion.velocity_sigma_m_s);
}

}  // namespace

logs::LogFacts archived_facts(const std::string& path) {
  const archive::Run run = archive::read_archive(path);
  logs::LogFacts facts;
  facts.name = core::as_utf8(std::filesystem::path(path).filename().string());
  facts.binary_format =
      core::as_utf8(fmt::format("archive of {} on {}, written {} by {}", run.log_name,
                                run.bike.name, run.created, run.program));
  facts.rows = run.time.samples;
  facts.rate_hz = run.time.rate_hz;
  facts.duration_s = run.duration_s;
  add_end(facts.columns, "/front", run.front);
  add_end(facts.columns, "/rear", run.rear);
  if (!run.speed_m_s.empty())
    facts.columns.push_back(series_facts("/speed_m_s", run.speed_m_s, run.riding, 1.0));
  for (std::size_t i = 0; i < facts.columns.size(); ++i)
    facts.columns[i].number = static_cast<int>(i) + 1;
  facts.faults = run.faults;
  facts.notes = run.notes;
  return facts;
}

}  // namespace clickwise::workflow
