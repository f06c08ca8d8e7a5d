#include "apparent_words.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"

namespace clickwise::report {

namespace {

constexpr double agrees = 0.05;          // of the load: less is not worth a word
constexpr double worth_a_word_ms = 1.0;  // of lag

std::string force_cell(const sim::ApparentPoint& point) {
  return fmt::format("{:.0f} ({:.0f} to {:.0f})", point.force_n.value, point.force_n.low,
                     point.force_n.high);
}

std::string bike_file_cell(const sim::ApparentPoint& point) {
  return point.bike_file_n ? fmt::format("{:.0f}", *point.bike_file_n) : "-";
}

void add_cells(const std::vector<sim::ApparentPoint>& points, std::size_t k,
               std::vector<std::string>& row) {
  const bool known = k < points.size();
  row.push_back(known ? force_cell(points[k]) : "-");
  row.push_back(known ? bike_file_cell(points[k]) : "-");
}

std::string friction_words(const sim::ApparentDamper& damper) {
  return fmt::format(
      "friction {:.0f} N ({:.0f} to {:.0f}); a damper without a bleed holds the "
      "same way and is in it",
      damper.friction_n.value, damper.friction_n.low, damper.friction_n.high);
}

std::string agreement_words(const sim::ApparentDamper& damper) {
  const sim::Bounded& share = damper.spring_share;
  if (!damper.spring_share_told)
    return "the ride does not tell whether masses and spring agree: the curve stands or falls with "
           "the sprung mass";
  if (std::abs(share.value - 1.0) <= agrees)
    return fmt::format("masses, spring and accelerometer agree within {:.0f} %",
                       std::max(1.0, 100.0 * std::abs(share.value - 1.0)));
  return fmt::format(
      "the accelerometer times the sprung mass gives {:.2f} times the spring's force: "
      "mass, spring or scale is off; the curve is scaled by the spring",
      share.value);
}

std::string acceleration_words(const sim::ApparentDamper& damper) {
  std::string words = fmt::format(
      "the sprung side's acceleration, {:.1f} m/s2 rms, is met within "
      "{:.1f} by this curve",
      damper.felt_rms_m_s2, damper.apparent_rms_m_s2);
  if (damper.model_rms_m_s2)
    words += fmt::format(", within {:.1f} by the bike file", *damper.model_rms_m_s2);
  return words;
}

std::string fade_words(const sim::ApparentDamper& damper) {
  if (!damper.fade) return "the ride is too short to tell whether the damping changes along it";
  const sim::Bounded& change = damper.fade->change;
  const std::string figures = fmt::format("{:+.0f} % ({:+.0f} to {:+.0f})", 100.0 * change.value,
                                          100.0 * change.low, 100.0 * change.high);
  if (!damper.fade->clear)
    return fmt::format("no clear fade: the damping changed by {} from start to end", figures);
  return fmt::format("{}: the damping changed by {} from start to end",
                     change.value < 0.0 ? "fade" : "the damper stiffens", figures);
}

}  // namespace

ApparentTable apparent_table(const sim::ApparentDamper& damper) {
  ApparentTable table;
  table.head = {"speed, mm/s", "compression, N", "bike file", "rebound, N", "bike file"};
  const bool longer = damper.compression.size() >= damper.rebound.size();
  const auto& speeds = longer ? damper.compression : damper.rebound;
  for (std::size_t k = 0; k < speeds.size(); ++k) {
    std::vector<std::string> row{fmt::format("{:.0f}", core::to_mm(speeds[k].speed_m_s))};
    add_cells(damper.compression, k, row);
    add_cells(damper.rebound, k, row);
    table.rows.push_back(std::move(row));
  }
  table.sentences = {friction_words(damper), agreement_words(damper), acceleration_words(damper),
                     fade_words(damper)};
  const double lag_ms = damper.lag_s / core::seconds_per_ms;
  if (std::abs(lag_ms) >= worth_a_word_ms)
    table.sentences.push_back(
        fmt::format("the accelerometer is {:.1f} ms {} the travel sensor, "
                    "which was taken off",
                    std::abs(lag_ms), lag_ms > 0.0 ? "behind" : "ahead of"));
  return table;
}

std::vector<std::string> apparent_words(const sim::ApparentDamper& damper) {
  if (!damper.problem.empty()) return {};
  const ApparentTable table = apparent_table(damper);
  std::vector<std::string> lines{
      "the damper as ridden, from the accelerometer (in brackets: 90 % "
      "bounds of the ride's scatter)"};
  const auto line = [&](const std::vector<std::string>& row) {
    lines.push_back(fmt::format("  {:>11}  {:>22} {:>10}  {:>22} {:>10}", row[0], row[1], row[2],
                                row[3], row[4]));
  };
  line(table.head);
  for (const auto& row : table.rows) line(row);
  for (const std::string& sentence : table.sentences) lines.push_back("  " + sentence);
  return lines;
}

}  // namespace clickwise::report
