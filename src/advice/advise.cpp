#include "clickwise/advice/advise.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/advice/find_symptoms.hpp"
#include "clickwise/core/errors.hpp"
#include "replay_choice.hpp"
#include "rule_choice.hpp"

namespace clickwise::advice {

namespace {

std::vector<Symptom> of_end(const std::vector<Symptom>& symptoms, bike::EndName end) {
  std::vector<Symptom> own;
  std::copy_if(symptoms.begin(), symptoms.end(), std::back_inserter(own),
               [&](const Symptom& symptom) { return symptom.end == end; });
  return own;
}

// Whether anything is off its aim by enough to act on.
bool any_clear(const std::vector<Symptom>& crossed, double sure_enough) {
  return std::any_of(crossed.begin(), crossed.end(),
                     [&](const Symptom& symptom) { return symptom.certainty() >= sure_enough; });
}

EndChoice choose(const EndRide& ride, const std::vector<Symptom>& measured,
                 const std::vector<Symptom>& crossed, const AdviceOptions& options,
                 std::vector<std::string>& notes) {
  if (!any_clear(crossed, options.least_confidence)) return {};
  if (options.by_rule) return choose_by_rule(ride, crossed, options);
  std::string why_not = ride.no_vehicle;
  if (ride.vehicle && ride.damper) {
    try {
      return choose_by_replay(ride, measured, options);
    } catch (const core::JobError& error) {
      why_not = error.what();
    }
  }
  if (ride.damper)
    notes.push_back(fmt::format("{}: judged by rule, not by riding the same ground again: {}",
                                bike::to_string(ride.name), why_not));
  return choose_by_rule(ride, crossed, options);
}

constexpr double shortest_judged_s = 20.0;  // less riding than this shows nothing

double longest_counted_s(const std::vector<EndRide>& rides) {
  double longest_s = 0.0;
  for (const EndRide& ride : rides) {
    const auto samples = std::count(ride.counted->begin(), ride.counted->end(), std::uint8_t{1});
    longest_s = std::max(longest_s, static_cast<double>(samples) * ride.motion->time.interval_s());
  }
  return longest_s;
}

std::string leave_it_words(const Advice& advice, const std::vector<EndRide>& rides,
                           double sure_enough) {
  const double counted_s = longest_counted_s(rides);
  if (counted_s < shortest_judged_s && advice.handovers.empty())
    return fmt::format("{:.1f} s of riding are too few to judge; log a whole run", counted_s);
  if (!advice.checks.empty()) return "the bike file and the log do not agree";
  if (advice.symptoms.empty()) return "every figure is at its aim";
  const bool damper_unknown =
      std::any_of(advice.handovers.begin(), advice.handovers.end(),
                  [](const Handover& handover) { return handover.to == "bike file"; });
  if (damper_unknown) return "the bike file does not describe the damper that would be turned";
  if (!advice.handovers.empty()) return "what is off its aim is not a job for an adjuster";
  return fmt::format(
      "nothing is off its aim by enough to be {:.0f} % sure of a step: ride and log "
      "more of the same",
      100.0 * sure_enough);
}

}  // namespace

Advice advise(const std::vector<EndRide>& rides, const bike::Aims& aims,
              const AdviceOptions& options) {
  Advice advice;
  const std::vector<Symptom> measured = measure_symptoms(rides, aims, options.seed);
  advice.symptoms = find_symptoms(measured);
  for (const EndRide& ride : rides) {
    EndChoice choice = choose(ride, of_end(measured, ride.name), of_end(advice.symptoms, ride.name),
                              options, advice.notes);
    if (!choice.check.empty()) advice.checks.push_back(std::move(choice.check));
    if (choice.step) advice.steps.push_back(std::move(*choice.step));
    std::move(choice.handovers.begin(), choice.handovers.end(),
              std::back_inserter(advice.handovers));
  }
  std::stable_sort(advice.steps.begin(), advice.steps.end(), [](const Step& a, const Step& b) {
    return a.symptom.severity * a.confidence > b.symptom.severity * b.confidence;
  });
  if (advice.steps.empty())
    advice.leave_it = leave_it_words(advice, rides, options.least_confidence);
  return advice;
}

const std::vector<std::string>& cautions() {
  static const std::vector<std::string> texts{
      "One change at a time, and note what it was before.",
      "Small steps; ride within your limits until you know how it feels.",
      "Stay inside the maker's range of clicks, pressure and rate.",
      "Sealed or pressurised parts are for a qualified service.",
  };
  return texts;
}

}  // namespace clickwise::advice
