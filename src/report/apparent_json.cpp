#include "apparent_json.hpp"

#include "clickwise/core/units.hpp"
#include "json_writer.hpp"

namespace clickwise::report {

namespace {

namespace json = boost::json;

json::object bounded_json(const sim::Bounded& figure) {
  return {
      {"value", number(figure.value)}, {"low", number(figure.low)}, {"high", number(figure.high)}};
}

json::array points_json(const std::vector<sim::ApparentPoint>& points) {
  json::array array;
  for (const sim::ApparentPoint& point : points) {
    json::object object{{"speed_mm_s", number(core::to_mm(point.speed_m_s))},
                        {"force_n", number(point.force_n.value)},
                        {"low_n", number(point.force_n.low)},
                        {"high_n", number(point.force_n.high)},
                        {"seconds", number(point.seconds)}};
    if (point.bike_file_n) object["bike_file_n"] = number(*point.bike_file_n);
    array.push_back(std::move(object));
  }
  return array;
}

json::object fade_json(const sim::Fade& fade) {
  json::array windows;
  for (const sim::FadeWindow& window : fade.windows)
    windows.push_back({{"t_s", number(window.t_s)}, {"share", number(window.share)}});
  return {{"change_share", number(fade.change.value)},
          {"low", number(fade.change.low)},
          {"high", number(fade.change.high)},
          {"clear", fade.clear},
          {"windows", std::move(windows)}};
}

}  // namespace

json::object apparent_json(const sim::ApparentDamper& damper) {
  json::object object{{"problem", json::string(damper.problem)},
                      {"mean_felt_g", number(damper.mean_felt_m_s2 / core::standard_gravity_m_s2)}};
  if (!damper.problem.empty()) return object;
  object["used_s"] = number(damper.used_s);
  object["lag_ms"] = number(damper.lag_s / core::seconds_per_ms);
  object["felt_rms_m_s2"] = number(damper.felt_rms_m_s2);
  if (damper.model_rms_m_s2) object["bike_file_error_m_s2"] = number(*damper.model_rms_m_s2);
  object["apparent_error_m_s2"] = number(damper.apparent_rms_m_s2);
  object["spring_share"] = bounded_json(damper.spring_share);
  object["spring_share_told"] = damper.spring_share_told;
  object["offset_n"] = number(damper.offset_n);
  object["friction_n"] = bounded_json(damper.friction_n);
  object["compression"] = points_json(damper.compression);
  object["rebound"] = points_json(damper.rebound);
  if (damper.fade) object["fade"] = fade_json(*damper.fade);
  return object;
}

}  // namespace clickwise::report
