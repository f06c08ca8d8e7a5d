#include "words.hpp"

#include <fmt/format.h>

#include <array>
#include <cmath>

namespace clickwise::report {

std::string duration_words(double seconds) {
  if (seconds < 10.0) return fmt::format("{:.1f} s", seconds);
  const auto whole = static_cast<long long>(std::llround(seconds));
  return fmt::format("{}:{:02}", whole / 60, whole % 60);
}

std::string part_words(bike::EndName end, bool capital) {
  std::string words(bike::part(end));
  if (capital) words[0] = static_cast<char>(words[0] - 'a' + 'A');
  return words;
}

std::string step_words(const advice::Step& step) {
  const int clicks = std::abs(step.to - step.from);
  return fmt::format("{} {}: from {} to {} clicks out ({} click{} {})", part_words(step.end),
                     bike::words(step.adjuster), step.from, step.to, clicks, clicks == 1 ? "" : "s",
                     step.to < step.from ? "firmer" : "softer");
}

std::string confidence_words(double confidence) {
  const char* const words = confidence >= 0.95   ? "very sure"
                            : confidence >= 0.85 ? "sure"
                                                 : "fairly sure";
  return fmt::format("{} ({:.0f} %)", words, 100.0 * confidence);
}

std::vector<std::string> predictions_words(const std::vector<advice::Prediction>& predictions) {
  struct Row {
    std::string_view metric;
    std::string_view words;
    std::string_view unit;
    double scale;
    int decimals;
  };
  static constexpr std::array<Row, 7> rows{{
      {"bottom_outs", "bottom-outs", "", 1.0, 0},
      {"travel.mean_mm", "mean travel", " mm", 1.0, 1},
      {"travel.p95_mm", "p95 travel", " mm", 1.0, 1},
      {"bands.compression.high_share", "high-speed compression time", " %", 100.0, 1},
      {"bands.compression.p95_mm_s", "p95 compression", " mm/s", 1.0, 0},
      {"bands.rebound.high_share", "high-speed rebound time", " %", 100.0, 1},
      {"bands.rebound.p95_mm_s", "p95 rebound", " mm/s", 1.0, 0},
  }};
  std::vector<std::string> lines;
  for (const Row& row : rows) {
    for (const advice::Prediction& prediction : predictions) {
      if (prediction.metric != row.metric) continue;
      lines.push_back(fmt::format("{}: {:.{}f}{} now, {:.{}f} then ({:.{}f} to {:.{}f})", row.words,
                                  row.scale * prediction.now, row.decimals, row.unit,
                                  row.scale * prediction.then, row.decimals,
                                  row.scale * prediction.low, row.decimals,
                                  row.scale * prediction.high, row.decimals));
    }
  }
  if (!lines.empty()) lines.emplace_back("in brackets: 90 % bounds, over the same ground");
  return lines;
}

std::string symptom_words(const advice::Symptom& symptom) {
  return fmt::format("{} {}: {:.3g} {} (aim {:.3g})", part_words(symptom.end),
                     advice::words(symptom.kind), symptom.value, advice::unit(symptom.kind),
                     symptom.aim);
}

std::string handover_words(const advice::Handover& handover) {
  const bool unnamed = handover.to == "bike file";
  const bool service = handover.to == "service";
  return fmt::format("{}: {}; {} {}: {}.",
                     unnamed ? "No click can be named" : "Not for an adjuster",
                     symptom_words(handover.symptom), service ? "for a" : "look at the",
                     handover.to, handover.why);
}

std::string split_source_words(workflow::SplitSource source) {
  switch (source) {
    case workflow::SplitSource::asked:
      return "as asked";
    case workflow::SplitSource::bike_file:
      return "from the bike file";
    case workflow::SplitSource::knee:
      return "the knee of the damper's curve";
    case workflow::SplitSource::fallback:
      break;
  }
  return "our default: no damper curve is known";
}

std::vector<std::string> fault_words(const run::FaultLedger& faults) {
  std::vector<std::string> sentences;
  for (const run::Fault& fault : faults.faults()) {
    std::string kind(run::to_string(fault.kind));
    if (kind == "time_restart") kind = "time restart";
    sentences.push_back(fmt::format("{}: {} {}{}, {:.2f} s left out; {}", kind, fault.count,
                                    fault.channel.empty() ? "on the clock" : "in ", fault.channel,
                                    fault.seconds, run::advice(fault.kind)));
  }
  return sentences;
}

std::vector<std::string> hand_arm_words(const std::optional<workflow::HandArm>& found) {
  if (!found) return {};
  const double a8 = found->daily_exposure_m_s2;
  return {fmt::format("{:.1f} m/s2 rms, weighted as in ISO 5349-1, up to {:.0f} Hz",
                      found->weighted_rms_m_s2, 0.5 * found->rate_hz),
          fmt::format("A(8) of this run alone: {:.2f} m/s2, {} (EU action value {:.1f}, limit "
                      "{:.1f}); a day's runs add by their squares",
                      a8,
                      a8 > workflow::hand_arm_limit_m_s2    ? "above the limit value"
                      : a8 > workflow::hand_arm_action_m_s2 ? "above the action value"
                                                            : "below the action value",
                      workflow::hand_arm_action_m_s2, workflow::hand_arm_limit_m_s2),
          "For information: the values are made for tools held at work; one unit on the bar is not "
          "the hand, and this is no medical advice."};
}

}  // namespace clickwise::report
