#include "clickwise/report/replay_text.hpp"

#include <fmt/format.h>

#include <functional>

#include "clickwise/core/units.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

using core::to_mm;

struct Row {
  sim::Metric metric;
  const char* words;
  double scale;
  int decimals;
};

constexpr Row rows[] = {
    {sim::Metric::bottom_outs, "bottom-outs", 1.0, 0},
    {sim::Metric::travel_mean, "mean travel, mm", 1e3, 1},
    {sim::Metric::travel_p95, "p95 travel, mm", 1e3, 1},
    {sim::Metric::compression_high_share, "high-speed compression, % of time", 100.0, 1},
    {sim::Metric::compression_p95, "p95 compression, mm/s", 1e3, 0},
    {sim::Metric::compression_high_j, "high-speed compression, J", 1.0, 0},
    {sim::Metric::rebound_high_share, "high-speed rebound, % of time", 100.0, 1},
    {sim::Metric::rebound_p95, "p95 rebound, mm/s", 1e3, 0},
    {sim::Metric::rebound_high_j, "high-speed rebound, J", 1.0, 0},
};

std::string end_text(const workflow::EndReplay& end) {
  const sim::ReplayResult& result = end.result;
  std::string text = fmt::format(
      "\n{}: {} replayed, {:.0f} % of it in the air; the model gives travel back to {:.2f} mm "
      "rms\n",
      part_words(end.name, true), duration_words(result.replayed_s), 100.0 * result.airborne_share,
      to_mm(result.travel_rms_m));
  if (!end.changed) return text + "  nothing was changed on this end\n";
  text += fmt::format("  {:<34} {:>9} {:>9} {:>9} {:>9}   {}\n", "", "recorded", "now", "then",
                      "change", "90 % bounds of the change");
  for (const Row& row : rows) {
    const sim::Change& change = result.predictions.front().change(row.metric);
    text += fmt::format(
        "  {:<34} {:>9.{}f} {:>9.{}f} {:>9.{}f} {:>+9.{}f}   {:+.{}f} to {:+.{}f}\n", row.words,
        row.scale * result.recorded.value(row.metric), row.decimals, row.scale * change.now,
        row.decimals, row.scale * change.then, row.decimals, row.scale * change.change,
        row.decimals, row.scale * change.low, row.decimals, row.scale * change.high, row.decimals);
  }
  return text;
}

std::string map_table(const workflow::ClickMap& map, const std::string& heading,
                      const std::function<std::string(const workflow::MapCell&)>& cell_words) {
  std::string text = fmt::format("\n{}\n        ", heading);
  for (int j = 0; j <= map.second.clicks; ++j) text += fmt::format("{:>7}", j);
  text += '\n';
  auto cell = map.cells.begin();
  for (int i = 0; i <= map.first.clicks; ++i) {
    text += fmt::format("  {:>4}  ", i);
    for (int j = 0; j <= map.second.clicks; ++j, ++cell) {
      const bool present = i == map.first.setting && j == map.second.setting;
      const std::string words = fmt::format("{}{}{}", present ? ">" : "", cell_words(*cell),
                                            cell->holds_aims ? "*" : " ");
      text += fmt::format("{:>7}", words);
    }
    text += '\n';
  }
  return text;
}

}  // namespace

std::string replay_text(const workflow::Replay& replay) {
  std::string text = fmt::format("{} on {}, the same ground with\n", replay.log.name,
                                 replay.bike_name.empty() ? "an unnamed bike" : replay.bike_name);
  if (replay.settings.empty()) text += "  the present settings\n";
  for (const workflow::ChangedSetting& setting : replay.settings)
    text += fmt::format("  {}: {:g} instead of {:g}\n", setting.name, setting.to, setting.from);
  for (const workflow::EndReplay& end : replay.ends) text += end_text(end);
  text +=
      "\nnow and then are modelled; the bounds are for this ground and what is not known of the "
      "bike.\nBottom-out counts cannot be told better than by about one in a minute.\n";
  for (const std::string& note : replay.notes) text += "Note: " + note + "\n";
  text += '\n';
  for (const std::string& caution : advice::cautions()) text += caution + "\n";
  return text;
}

std::string click_map_text(const workflow::ClickMap& map) {
  std::string text = fmt::format(
      "{}: {} (clicks out, down) by {} (across). > marks the present setting, * where mean "
      "travel,\n"
      "travel used, bottom-outs and top-outs are all at their aims\n",
      part_words(map.end, true), bike::words(map.first.adjuster), bike::words(map.second.adjuster));
  text += map_table(map, "bottom-outs", [](const workflow::MapCell& cell) {
    return fmt::format("{}", cell.figures.bottom_outs.size());
  });
  text += map_table(map, "mean travel, mm", [](const workflow::MapCell& cell) {
    return fmt::format("{:.1f}", to_mm(cell.figures.travel_mean_m));
  });
  text += map_table(map, "high-speed compression, % of time", [](const workflow::MapCell& cell) {
    return fmt::format("{:.1f}", 100.0 * cell.figures.value(sim::Metric::compression_high_share));
  });
  return text;
}

}  // namespace clickwise::report
