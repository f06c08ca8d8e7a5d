#include "clickwise/core/units.hpp"
#include "clickwise/report/replay_text.hpp"
#include "json_writer.hpp"

namespace clickwise::report {

namespace {

namespace json = boost::json;
using core::to_mm;

json::object band_json(const sim::BandFigures& band) {
  return {{"low_s", number(band.low_s)},
          {"high_s", number(band.high_s)},
          {"low_j", number(band.low_j)},
          {"high_j", number(band.high_j)},
          {"p50_mm_s", number(to_mm(band.p50_m_s))},
          {"p95_mm_s", number(to_mm(band.p95_m_s))},
          {"max_mm_s", number(to_mm(band.max_m_s))}};
}

json::array stops_json(const std::vector<run::EndStop>& stops) {
  json::array array;
  for (const run::EndStop& stop : stops)
    array.push_back({{"t_s", number(stop.t_s)},
                     {"depth_mm", number(to_mm(stop.depth_m))},
                     {"closing_speed_mm_s", number(to_mm(stop.closing_speed_m_s))}});
  return array;
}

json::object figures_json(const sim::EndFigures& figures) {
  return {
      {"bands",
       {{"compression", band_json(figures.bands[0])}, {"rebound", band_json(figures.bands[1])}}},
      {"travel",
       {{"mean_mm", number(to_mm(figures.travel_mean_m))},
        {"p50_mm", number(to_mm(figures.travel_p50_m))},
        {"p95_mm", number(to_mm(figures.travel_p95_m))},
        {"max_mm", number(to_mm(figures.travel_max_m))}}},
      {"bottom_outs", stops_json(figures.bottom_outs)},
      {"top_outs", stops_json(figures.top_outs)}};
}

json::array changes_json(const sim::Prediction& prediction) {
  json::array changes;
  for (std::size_t m = 0; m < sim::metrics; ++m) {
    const auto metric = static_cast<sim::Metric>(m);
    const double scale = sim::units_per_si(metric);
    const sim::Change& change = prediction.change(metric);
    changes.push_back({{"metric", sim::to_string(metric)},
                       {"now", number(scale * change.now)},
                       {"then", number(scale * change.then)},
                       {"change", number(scale * change.change)},
                       {"low", number(scale * change.low)},
                       {"high", number(scale * change.high)}});
  }
  return changes;
}

json::object end_json(const workflow::EndReplay& end) {
  const sim::ReplayResult& result = end.result;
  return {{"changed", end.changed},
          {"replayed_s", number(result.replayed_s)},
          {"airborne_share", number(result.airborne_share)},
          {"carried_share", number(result.carried_share)},
          {"mismatch",
           {{"travel_rms_mm", number(to_mm(result.travel_rms_m))},
            {"velocity_rms_mm_s", number(to_mm(result.velocity_rms_m_s))}}},
          {"recorded", figures_json(result.recorded)},
          {"modelled", figures_json(result.modelled)},
          {"predicted", figures_json(result.predictions.front().figures)},
          {"changes", changes_json(result.predictions.front())}};
}

}  // namespace

std::string replay_json(const workflow::Replay& replay) {
  json::object settings;
  for (const workflow::ChangedSetting& setting : replay.settings)
    settings[setting.name] = {{"from", number(setting.from)}, {"to", number(setting.to)}};
  json::object ends;
  for (const workflow::EndReplay& end : replay.ends)
    ends[bike::to_string(end.name)] = end_json(end);
  json::array notes;
  for (const std::string& note : replay.notes) notes.push_back(json::string(note));
  return to_text(json::object{{"schema", "clickwise-replay-1"},
                              {"bike", json::string(replay.bike_name)},
                              {"log", json::string(replay.log.name)},
                              {"settings", std::move(settings)},
                              {"seed", replay.ends.front().result.seed},
                              {"ends", std::move(ends)},
                              {"notes", std::move(notes)}});
}

std::string click_map_json(const workflow::ClickMap& map) {
  json::array cells;
  for (const workflow::MapCell& cell : map.cells) {
    json::object object{
        {"first", cell.first}, {"second", cell.second}, {"holds_aims", cell.holds_aims}};
    for (std::size_t m = 0; m < sim::metrics; ++m) {
      const auto metric = static_cast<sim::Metric>(m);
      object[sim::to_string(metric)] =
          number(sim::units_per_si(metric) * cell.figures.value(metric));
    }
    cells.push_back(std::move(object));
  }
  const auto knob = [](const damper::AdjusterRange& range) {
    return json::object{{"adjuster", json::string(bike::to_string(range.adjuster))},
                        {"setting", range.setting},
                        {"clicks", range.clicks}};
  };
  return to_text(json::object{{"schema", "clickwise-map-1"},
                              {"end", json::string(bike::to_string(map.end))},
                              {"first", knob(map.first)},
                              {"second", knob(map.second)},
                              {"cells", std::move(cells)}});
}

}  // namespace clickwise::report
