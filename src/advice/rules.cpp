#include "rules.hpp"

#include <map>
#include <optional>

#include "clickwise/advice/find_symptoms.hpp"

namespace clickwise::advice {

namespace {

using bike::Adjuster;

constexpr bool firmer = true;
constexpr bool softer = false;

const std::map<SymptomKind, std::vector<Move>> moves{
    {SymptomKind::hard_bottoming,
     {{Adjuster::high_speed_compression, firmer}, {Adjuster::low_speed_compression, firmer}}},
    {SymptomKind::packs_down,
     {{Adjuster::low_speed_rebound, softer}, {Adjuster::high_speed_rebound, softer}}},
    {SymptomKind::returns_too_fast,
     {{Adjuster::low_speed_rebound, firmer}, {Adjuster::high_speed_rebound, firmer}}},
    {SymptomKind::harsh,
     {{Adjuster::high_speed_compression, softer}, {Adjuster::low_speed_compression, softer}}},
    {SymptomKind::held_by_platform, {{Adjuster::low_speed_compression, softer}}},
    // The bleed's force is capped by the valve's opening force: beyond it, support is preload.
    {SymptomKind::wallows,
     {{Adjuster::low_speed_compression, firmer},
      {Adjuster::low_speed_rebound, firmer},
      {Adjuster::high_speed_compression, firmer}}},
    {SymptomKind::unused_travel,
     {{Adjuster::high_speed_compression, softer}, {Adjuster::low_speed_compression, softer}}},
};

const std::map<SymptomKind, Receiver> receivers{
    {SymptomKind::hard_bottoming,
     {"volume",
      "a smaller air chamber or a longer bumper takes more energy at the end of the stroke"}},
    {SymptomKind::slow_bottoming,
     {"spring",
      "it goes through its travel slowly, where the damper does little: more rate or "
      "pressure, or a smaller air chamber, comes first"}},
    {SymptomKind::rides_deep,
     {"spring", "mean travel follows the spring: check sag, then rate or pressure"}},
    {SymptomKind::rides_high,
     {"spring", "mean travel follows the spring: check sag, then a softer rate or less pressure"}},
    {SymptomKind::unused_travel,
     {"spring",
      "the last of the travel is never used: check the calibration, then sag, then the "
      "air chamber's volume"}},
    {SymptomKind::packs_down,
     {"service",
      "the rebound adjusters do not reach it: have the damper looked at by a qualified "
      "service"}},
    {SymptomKind::returns_too_fast,
     {"service",
      "the rebound adjusters do not reach it: have the damper looked at by a qualified "
      "service"}},
    {SymptomKind::harsh,
     {"tyre", "the compression adjusters do not reach it: look at tyre pressure first"}},
    {SymptomKind::held_by_platform,
     {"service",
      "no adjuster opens the damper enough: friction or the damper itself needs a "
      "qualified service"}},
    {SymptomKind::wallows,
     {"service",
      "the adjusters do not give enough damping: have the damper looked at by a "
      "qualified service"}},
};

}  // namespace

const std::vector<Move>& moves_for(SymptomKind kind) {
  static const std::vector<Move> none;
  const auto found = moves.find(kind);
  return found == moves.end() ? none : found->second;
}

std::optional<bool> part_for(SymptomKind kind) {
  switch (kind) {
    case SymptomKind::hard_bottoming:
    case SymptomKind::slow_bottoming:
    case SymptomKind::rides_deep:
      return firmer;
    case SymptomKind::rides_high:
    case SymptomKind::unused_travel:
      return softer;
    default:
      return std::nullopt;
  }
}

const Receiver& receiver_of(SymptomKind kind) {
  return receivers.at(kind);
}

const Receiver& receiver_without_damper(SymptomKind kind) {
  static const Receiver bike_file{
      "bike file", "it does not describe the damper: with its clicks a step can be named"};
  return moves_for(kind).empty() ? receiver_of(kind) : bike_file;
}

bool is_for_clicks(const Symptom& symptom, const EndRide& ride) {
  if (symptom.kind != SymptomKind::rides_deep && symptom.kind != SymptomKind::rides_high)
    return !moves_for(symptom.kind).empty();
  const std::optional<double> sag = static_sag_percent(ride);
  return sag && symptom.sign * (symptom.aim - *sag) > aim_tolerance(symptom.kind);
}

std::string doubt_words(const damper::Damper& damper, const damper::AdjusterRange& range) {
  if (damper.assumed())
    return "; less sure because the damper's curve is assumed: points from a dyno would settle it";
  if (range.assumed)
    return "; less sure because the dyno table does not tell what this adjuster's clicks move, so "
           "that is assumed";
  return {};
}

}  // namespace clickwise::advice
