#include "rule_choice.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <boost/math/special_functions/gamma.hpp>
#include <cmath>

#include "clickwise/advice/find_symptoms.hpp"
#include "clickwise/core/units.hpp"
#include "rules.hpp"

namespace clickwise::advice {

namespace {

constexpr double window_before_event_s = 0.3;
constexpr double least_share_per_click =
    0.01;  // of the damper's work: below it a click is not felt
// A rule of thumb is never certain, and less so on a curve, or clicks, that nobody measured.
constexpr double rule_confidence = 0.9;
constexpr double assumed_confidence = 0.75;

std::vector<Window> before(const std::vector<run::EndStop>& stops) {
  std::vector<Window> windows;
  double last_s = -1e300;
  for (const run::EndStop& stop : stops) {
    windows.push_back({std::max(last_s, stop.t_s - window_before_event_s), stop.t_s});
    last_s = stop.t_s;
  }
  return windows;
}

std::vector<run::EndStop> hard_bottom_outs(const EndRide& ride) {
  std::vector<run::EndStop> hard;
  for (const run::EndStop& stop : *ride.bottom_outs)
    if (is_hard(ride, stop)) hard.push_back(stop);
  return hard;
}

// Where in the ride the symptom is made.
std::vector<Window> windows_of(const Symptom& symptom, const EndRide& ride) {
  switch (symptom.kind) {
    case SymptomKind::hard_bottoming:
      return before(hard_bottom_outs(ride));
    case SymptomKind::returns_too_fast:
      return before(top_outs_on_the_ground(ride));
    case SymptomKind::packs_down: {
      std::vector<Window> windows;
      for (const run::HitTrain& train : *ride.trains)
        windows.push_back({train.begin_s, train.end_s});
      return windows;
    }
    default:
      return {{ride.motion->time.at(0), ride.motion->time.at(ride.motion->time.samples)}};
  }
}

// A move that this damper can make, with what a click of it is worth where the symptom is made.
struct Candidate {
  Move move;
  damper::AdjusterRange range;
  int room = 0;  // clicks left in the move's direction
  double joules = 0.0;
  double share = 0.0;
};

Candidate candidate(const Move& move, const EndRide& ride, const damper::RideDensity& density) {
  Candidate result{move, *ride.damper->adjuster(move.adjuster)};
  result.room = move.firmer ? result.range.setting : result.range.clicks - result.range.setting;
  const bool compression = bike::acts_in_compression(move.adjuster);
  const damper::Reach reach =
      damper::reach(*ride.damper, move.adjuster, density,
                    compression ? ride.compression_split_m_s : ride.rebound_split_m_s);
  result.joules = reach.low_j + reach.high_j;
  const damper::Law law =
      compression ? ride.damper->curve().compression : ride.damper->curve().rebound;
  const core::Density& speeds = compression ? density.compression : density.rebound;
  double work_j = 0.0;
  for (std::size_t i = 0; i < speeds.at.size(); ++i)
    work_j += law.force_n(speeds.at[i]) * speeds.at[i] * speeds.weight[i];
  result.share = work_j > 0.0 ? result.joules / work_j : 0.0;
  return result;
}

std::optional<Candidate> best_candidate(const Symptom& symptom, const EndRide& ride) {
  if (!ride.damper) return std::nullopt;
  const damper::RideDensity density = ride_density(ride, windows_of(symptom, ride));
  std::optional<Candidate> best;
  for (const Move& move : moves_for(symptom.kind)) {
    if (!ride.damper->adjuster(move.adjuster)) continue;
    const Candidate found = candidate(move, ride, density);
    if (found.room < 1 || found.share < least_share_per_click) continue;
    if (!best || found.share > best->share) best = found;
  }
  return best;
}

// What a bottom-out needs taken from it before it is met: the sprung share's kinetic energy at the
// crossing, at the shaft.
double excess_j(const EndRide& ride, const run::EndStop& stop) {
  const double ratio = ride.end->ratio(ride.end->stroke_m);
  const double wheel_speed_m_s = stop.closing_speed_m_s * ratio;
  return 0.5 * *ride.sprung_mass_kg * wheel_speed_m_s * wheel_speed_m_s;
}

// Bottom-outs that remain when the move is made by `clicks`: those whose excess is larger than what
// the firmer damper takes on the same way down.
int remaining_bottom_outs(const EndRide& ride, const Move& move, int to) {
  const damper::Law now = ride.damper->curve().compression;
  const damper::Law then = ride.damper->curve_with(move.adjuster, to).compression;
  int remaining = 0;
  for (const run::EndStop& stop : *ride.bottom_outs) {
    const core::Density speeds = ride_density(ride, before({stop})).compression;
    double taken_j = 0.0;
    for (std::size_t i = 0; i < speeds.at.size(); ++i)
      taken_j += (then.force_n(speeds.at[i]) - now.force_n(speeds.at[i])) * speeds.at[i] *
                 speeds.weight[i];
    if (taken_j < excess_j(ride, stop)) ++remaining;
  }
  return remaining;
}

Prediction predicted_bottom_outs(const EndRide& ride, int remaining) {
  const double then = remaining;
  return {"bottom_outs", static_cast<double>(ride.bottom_outs->size()), then,
          then > 0.0 ? boost::math::gamma_p_inv(then, 0.05) : 0.0,
          boost::math::gamma_p_inv(then + 1.0, 0.95)};
}

int target_setting(const Candidate& candidate, int clicks) {
  return candidate.range.setting + (candidate.move.firmer ? -clicks : clicks);
}

// The fewest clicks, up to the most allowed, that bring the symptom to its aim.
int clicks_needed(const Symptom& symptom, const EndRide& ride, const Candidate& candidate,
                  int most) {
  if (symptom.kind != SymptomKind::hard_bottoming || !ride.sprung_mass_kg)
    return symptom.severity > 4.0 ? std::min(2, most) : 1;
  const double minutes = symptom.value > 0.0
                             ? static_cast<double>(hard_bottom_outs(ride).size()) / symptom.value
                             : 1.0;
  for (int clicks = 1; clicks < most; ++clicks) {
    const int remaining =
        remaining_bottom_outs(ride, candidate.move, target_setting(candidate, clicks));
    if (remaining / minutes <= symptom.aim) return clicks;
  }
  return most;
}

std::string why(const Symptom& symptom, const EndRide& ride, const Candidate& candidate) {
  std::string text =
      fmt::format("{} {:.3g} {} (aim {:.3g}, 90 % interval {:.3g} to {:.3g})", words(symptom.kind),
                  symptom.value, unit(symptom.kind), symptom.aim, symptom.low, symptom.high);
  if (symptom.kind == SymptomKind::hard_bottoming) {
    const auto hard = hard_bottom_outs(ride);
    const auto [least, most] = std::minmax_element(
        hard.begin(), hard.end(), [](const run::EndStop& a, const run::EndStop& b) {
          return a.closing_speed_m_s < b.closing_speed_m_s;
        });
    text += fmt::format(", met at {:.0f} to {:.0f} mm/s", core::to_mm(least->closing_speed_m_s),
                        core::to_mm(most->closing_speed_m_s));
  }
  return text +
         fmt::format(
             "; where that happens one click is worth {:.1f} J, {:.1f} % of the "
             "damper's work there",
             candidate.joules, 100.0 * candidate.share) +
         doubt_words(*ride.damper, candidate.range);
}

Step step_for(const Symptom& symptom, const EndRide& ride, const Candidate& candidate,
              const AdviceOptions& options) {
  const int most = std::min(options.most_clicks, candidate.room);
  const int clicks = clicks_needed(symptom, ride, candidate, most);
  Step step;
  step.end = ride.name;
  step.adjuster = candidate.move.adjuster;
  step.from = candidate.range.setting;
  step.to = target_setting(candidate, clicks);
  step.symptom = symptom;
  step.why = why(symptom, ride, candidate);
  step.confidence =
      symptom.certainty() * (candidate.range.assumed ? assumed_confidence : rule_confidence);
  if (symptom.kind == SymptomKind::hard_bottoming && ride.sprung_mass_kg)
    step.predicted.push_back(
        predicted_bottom_outs(ride, remaining_bottom_outs(ride, candidate.move, step.to)));
  return step;
}

}  // namespace

EndChoice choose_by_rule(const EndRide& ride, const std::vector<Symptom>& crossed,
                         const AdviceOptions& options) {
  EndChoice choice;
  for (const Symptom& symptom : crossed) {
    if (symptom.certainty() < options.least_confidence) continue;
    const std::optional<Candidate> candidate = best_candidate(symptom, ride);
    if (!candidate) {
      const Receiver& receiver =
          ride.damper ? receiver_of(symptom.kind) : receiver_without_damper(symptom.kind);
      choice.handovers.push_back({symptom, receiver.to, receiver.why});
      continue;
    }
    const Step step = step_for(symptom, ride, *candidate, options);
    if (!choice.step && step.confidence >= options.least_confidence) choice.step = step;
  }
  return choice;
}

}  // namespace clickwise::advice
