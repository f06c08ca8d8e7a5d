#include "clickwise/report/review_json.hpp"

#include "apparent_json.hpp"
#include "clickwise/core/units.hpp"
#include "json_writer.hpp"

namespace clickwise::report {

namespace {

namespace json = boost::json;
using core::to_mm;

constexpr double per_metre = 1.0 / core::metres_per_mm;

json::string text(std::string_view words) {
  return json::string(words);
}

std::string_view source_name(run::Source source) {
  switch (source) {
    case run::Source::imu_pair:
      return "imu_pair";
    case run::Source::archive:
      return "archive";
    case run::Source::potentiometer:
      break;
  }
  return "potentiometer";
}

std::string_view split_source_name(workflow::SplitSource source) {
  switch (source) {
    case workflow::SplitSource::asked:
      return "asked";
    case workflow::SplitSource::bike_file:
      return "bike_file";
    case workflow::SplitSource::knee:
      return "knee";
    case workflow::SplitSource::fallback:
      break;
  }
  return "fallback";
}

json::object log_json(const workflow::LogSummary& log) {
  json::array faults;
  for (const run::Fault& fault : log.faults.faults())
    faults.push_back({{"kind", text(run::to_string(fault.kind))},
                      {"channel", text(fault.channel)},
                      {"count", fault.count},
                      {"seconds", number(fault.seconds)},
                      {"advice", text(run::advice(fault.kind))}});
  return {{"name", text(log.name)},           {"duration_s", number(log.duration_s)},
          {"riding_s", number(log.riding_s)}, {"rate_hz", number(log.rate_hz)},
          {"samples", log.samples},           {"faults", std::move(faults)}};
}

json::object band_json(const bands::Band& band, workflow::SplitSource source) {
  json::object object{{"split_mm_s", number(to_mm(band.split_m_s))},
                      {"split_source", text(split_source_name(source))},
                      {"low_s", number(band.low_s)},
                      {"high_s", number(band.high_s)},
                      {"low_m", number(band.low_m)},
                      {"high_m", number(band.high_m)}};
  if (band.low_j) object["low_j"] = number(*band.low_j);
  if (band.high_j) object["high_j"] = number(*band.high_j);
  object["p50_mm_s"] = number(to_mm(band.p50_m_s));
  object["p95_mm_s"] = number(to_mm(band.p95_m_s));
  object["max_mm_s"] = number(to_mm(band.max_m_s));
  return object;
}

json::object velocity_histogram_json(const bands::VelocityHistogram& histogram) {
  json::object object{{"edges_mm_s", numbers(histogram.edges_m_s, per_metre)},
                      {"seconds", numbers(histogram.seconds)},
                      {"metres", numbers(histogram.metres)}};
  if (!histogram.joules.empty()) object["joules"] = numbers(histogram.joules);
  return object;
}

json::object travel_json(const bands::TravelUse& travel) {
  return {{"mean_mm", number(to_mm(travel.mean_m))},
          {"p50_mm", number(to_mm(travel.p50_m))},
          {"p95_mm", number(to_mm(travel.p95_m))},
          {"max_mm", number(to_mm(travel.max_m))},
          {"histogram",
           {{"edges_mm", numbers(travel.histogram.edges_m, per_metre)},
            {"seconds", numbers(travel.histogram.seconds)}}}};
}

json::array stops_json(const std::vector<run::EndStop>& stops) {
  json::array array;
  for (const run::EndStop& stop : stops) {
    json::object object{{"t_s", number(stop.t_s)},
                        {"depth_mm", number(to_mm(stop.depth_m))},
                        {"closing_speed_mm_s", number(to_mm(stop.closing_speed_m_s))}};
    // 0 where the moving mass is not known, run/event.hpp.
    if (stop.energy_left_j > 0.0) object["energy_left_j"] = number(stop.energy_left_j);
    array.push_back(std::move(object));
  }
  return array;
}

json::array trains_json(const std::vector<run::HitTrain>& trains) {
  json::array array;
  for (const run::HitTrain& train : trains)
    array.push_back({{"begin_s", number(train.begin_s)},
                     {"end_s", number(train.end_s)},
                     {"hits", train.hits},
                     {"first_start_mm", number(to_mm(train.first_start_m))},
                     {"climb_mm_per_hit", number(to_mm(train.climb_m_per_hit))}});
  return array;
}

json::object adjusters_json(const std::vector<workflow::AdjusterReview>& adjusters) {
  json::object object;
  for (const workflow::AdjusterReview& adjuster : adjusters) {
    const std::string direction =
        bike::acts_in_compression(adjuster.range.adjuster) ? "compression" : "rebound";
    const damper::Reach& reach = adjuster.reach;
    object[bike::to_string(adjuster.range.adjuster)] = {
        {"setting", adjuster.range.setting},
        {"clicks", adjuster.range.clicks},
        {"reach",
         {{direction + "_low", number(reach.low_j)}, {direction + "_high", number(reach.high_j)}}},
        {"reach_share",
         {{direction + "_low", number(reach.low_share)},
          {direction + "_high", number(reach.high_share)}}}};
  }
  return object;
}

json::object known_end_json(const workflow::EndReview& end) {
  json::object object{
      {"source", text(source_name(end.source))},
      {"stroke_mm", number(to_mm(end.stroke_m))},
      {"riding_s", number(end.riding_s)},
      {"velocity_noise_mm_s", number(to_mm(end.velocity_noise_m_s))},
      {"smoothing", text(end.smoothing)},
      {"velocity_histogram", velocity_histogram_json(end.bands.histogram)},
      {"bands",
       {{"compression", band_json(end.bands.compression, end.compression_split_source)},
        {"rebound", band_json(end.bands.rebound, end.rebound_split_source)}}},
      {"travel", travel_json(end.travel)},
      {"bottom_outs", stops_json(end.bottom_outs)},
      {"top_outs", stops_json(end.top_outs)},
      {"hit_trains", trains_json(end.trains)},
      {"damper_assumed", end.damper_assumed},
      {"adjusters", adjusters_json(end.adjusters)}};
  if (end.apparent) object["apparent_damper"] = apparent_json(*end.apparent);
  return object;
}

json::object end_json(const workflow::EndReview& end) {
  json::object object = known_end_json(end);
  if (end.travel_withheld.empty()) return object;
  for (const char* key : {"travel", "bottom_outs", "top_outs", "hit_trains"}) object[key] = nullptr;
  object["travel_withheld"] = text(end.travel_withheld);
  return object;
}

json::value hand_arm_json(const std::optional<workflow::HandArm>& found) {
  if (!found) return nullptr;
  return json::object{{"weighted_rms_m_s2", number(found->weighted_rms_m_s2)},
                      {"daily_exposure_m_s2", number(found->daily_exposure_m_s2)},
                      {"action_m_s2", workflow::hand_arm_action_m_s2},
                      {"limit_m_s2", workflow::hand_arm_limit_m_s2},
                      {"highest_frequency_hz", number(0.5 * found->rate_hz)}};
}

json::object symptom_json(const advice::Symptom& symptom) {
  return {{"end", text(bike::to_string(symptom.end))},
          {"symptom", text(advice::words(symptom.kind))},
          {"unit", text(advice::unit(symptom.kind))},
          {"value", number(symptom.value)},
          {"low", number(symptom.low)},
          {"high", number(symptom.high)},
          {"aim", number(symptom.aim)},
          {"severity", number(symptom.severity)}};
}

json::object step_json(const advice::Step& step) {
  json::object predicted;
  for (const advice::Prediction& prediction : step.predicted)
    predicted[prediction.metric] = {{"now", number(prediction.now)},
                                    {"then", number(prediction.then)},
                                    {"low", number(prediction.low)},
                                    {"high", number(prediction.high)}};
  return {{"end", text(bike::to_string(step.end))},
          {"adjuster", text(bike::to_string(step.adjuster))},
          {"from", step.from},
          {"to", step.to},
          {"symptom", text(advice::words(step.symptom.kind))},
          {"why", text(step.why)},
          {"confidence", number(step.confidence)},
          {"predicted", std::move(predicted)},
          {"by", step.seed ? "replay" : "rule"},
          {"seed", step.seed ? json::value(*step.seed) : json::value()}};
}

// The review's own, then what the advice has to say of itself.
std::vector<std::string> all_notes(const workflow::Review& review) {
  std::vector<std::string> all = review.notes;
  all.insert(all.end(), review.advice.checks.begin(), review.advice.checks.end());
  all.insert(all.end(), review.advice.notes.begin(), review.advice.notes.end());
  return all;
}

json::object front_rear_json(const std::optional<workflow::FrontRear>& both) {
  if (!both) return {};
  return {{"mean_travel_difference_share", number(both->mean_travel_difference)},
          {"compression_p95_ratio", number(both->compression_p95_ratio)},
          {"rebound_p95_ratio", number(both->rebound_p95_ratio)}};
}

json::array airtimes_json(const std::vector<run::Airtime>& airtimes) {
  json::array array;
  for (const run::Airtime& air : airtimes)
    array.push_back({{"begin_s", number(air.begin_s)}, {"end_s", number(air.end_s)}});
  return array;
}

json::array strings(const std::vector<std::string>& texts) {
  json::array array;
  for (const std::string& words : texts) array.push_back(text(words));
  return array;
}

}  // namespace

std::string review_json(const workflow::Review& review) {
  json::object ends;
  for (const workflow::EndReview& end : review.ends)
    ends[bike::to_string(end.name)] = end_json(end);
  json::array steps;
  for (const advice::Step& step : review.advice.steps) steps.push_back(step_json(step));
  json::array handovers;
  for (const advice::Handover& handover : review.advice.handovers) {
    json::object object = symptom_json(handover.symptom);
    object["to"] = text(handover.to);
    object["why"] = text(handover.why);
    handovers.push_back(std::move(object));
  }
  json::array symptoms;
  for (const advice::Symptom& symptom : review.advice.symptoms)
    symptoms.push_back(symptom_json(symptom));
  const json::object root{{"schema", "clickwise-review-1"},
                          {"bike", text(review.bike_name)},
                          {"log", log_json(review.log)},
                          {"ends", std::move(ends)},
                          {"front_rear", front_rear_json(review.front_rear)},
                          {"hand_arm", hand_arm_json(review.hand_arm)},
                          {"airtimes", airtimes_json(review.airtimes)},
                          {"advice", std::move(steps)},
                          {"leave_it", text(review.advice.leave_it)},
                          {"not_for_an_adjuster", std::move(handovers)},
                          {"symptoms", std::move(symptoms)},
                          {"missing", strings(review.missing)},
                          {"notes", strings(all_notes(review))},
                          {"cautions", strings(advice::cautions())}};
  return to_text(root);
}

}  // namespace clickwise::report
