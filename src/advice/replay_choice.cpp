#include "replay_choice.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <cstdlib>

#include "clickwise/advice/find_symptoms.hpp"
#include "outcomes.hpp"
#include "rules.hpp"

namespace clickwise::advice {

namespace {

// A symptom counts as made clearly worse when its severity rises by more than this, and is worth
// watching when it rises by more than that.
constexpr double clearly_worse = 1.0;
constexpr double worth_watching = 0.25;
// A step must lower the summed severity by at least this, and a symptom is reached when it falls by
// at least this share.
constexpr double least_benefit = 0.5;
constexpr double reached_share = 0.3;
// A step that takes its symptom less of the way than this is not worth a run.
constexpr double least_way_share = 0.1;
// Moves whose benefits differ by less than this share count as equal; the smaller one is advised.
constexpr double equal_share = 0.1;
// A curve, or the worth of a click, that nobody measured.
constexpr double assumed_confidence = 0.85;

// As recorded, and moved by what the model says: the numbers a rider can check on the next run.
std::vector<Prediction> predictions(const sim::Prediction& predicted,
                                    const sim::EndFigures& recorded) {
  std::vector<Prediction> moved;
  for (std::size_t m = 0; m < sim::metrics; ++m) {
    const auto metric = static_cast<sim::Metric>(m);
    const sim::Change& change = predicted.change(metric);
    const double scale = sim::units_per_si(metric);
    const double now = scale * recorded.value(metric);
    const bool moves = change.low > 0.0 || change.high < 0.0;
    // A count is a range and promises no sign, so it is told where there is one at all.
    const bool counted = metric == sim::Metric::bottom_outs && std::max(now, change.then) >= 0.5;
    if (!moves && !counted) continue;
    const auto then = [&](double by) { return std::max(0.0, now + scale * by); };
    moved.push_back(
        {sim::to_string(metric), now, then(change.change), then(change.low), then(change.high)});
  }
  return moved;
}

class Choice {
public:
  Choice(const EndRide& ride, const std::vector<Symptom>& measured, const AdviceOptions& options)
      : ride_(ride),
        measured_(measured),
        options_(options),
        tried_(ride_trials(ride, measured, options)) {}

  EndChoice choose() const;

private:
  double benefit(std::size_t click) const {
    return benefit_of_clicks(tried_.for_clicks, tried_.now, tried_.of_clicks[click].means());
  }
  double confidence(std::size_t click) const;
  bool makes_worse(const Outcome& outcome) const;
  bool fit_for_a_step(std::size_t click) const;
  std::optional<std::size_t> best_click() const;
  std::size_t most_eased(std::size_t click) const;
  double share_of_way(const Outcome& outcome, std::size_t symptom) const;
  std::string why(std::size_t click) const;
  Step step_of(std::size_t click) const;
  bool eases(const Outcome& outcome, std::size_t symptom) const;
  bool reaches(const Outcome& outcome, std::size_t symptom) const;
  bool sag_is_off() const;
  std::optional<std::size_t> best_part(std::size_t symptom) const;
  std::optional<Handover> handover_of(std::size_t symptom,
                                      const std::optional<std::size_t>& step) const;

  const EndRide& ride_;
  const std::vector<Symptom>& measured_;
  const AdviceOptions& options_;
  Outcomes tried_;
};

// Share of the draws in which the step helps, by Laplace's rule of succession, so that a dozen
// draws never make it certain.
double Choice::confidence(std::size_t click) const {
  const auto& draws = tried_.of_clicks[click].severity;
  const auto helps = std::count_if(draws.begin(), draws.end(), [&](const auto& severities) {
    return benefit_of_clicks(tried_.for_clicks, tried_.now, severities) > 1e-9;
  });
  const double share =
      (static_cast<double>(helps) + 1.0) / (static_cast<double>(draws.size()) + 2.0);
  return share * (tried_.clicks[click].range.assumed ? assumed_confidence : 1.0);
}

bool Choice::makes_worse(const Outcome& outcome) const {
  for (std::size_t k = 0; k < measured_.size(); ++k)
    if (outcome.mean(k) > tried_.now[k] + clearly_worse) return true;
  return false;
}

// Of the symptoms that are an adjuster's job.
std::size_t Choice::most_eased(std::size_t click) const {
  const Outcome& outcome = tried_.of_clicks[click];
  std::size_t best = 0;
  double most = -1.0;
  for (std::size_t k = 0; k < measured_.size(); ++k) {
    const double gain = tried_.now[k] - outcome.mean(k);
    if (!tried_.for_clicks[k] || gain <= most) continue;
    best = k;
    most = gain;
  }
  return best;
}

bool Choice::fit_for_a_step(std::size_t click) const {
  return benefit(click) >= least_benefit && !makes_worse(tried_.of_clicks[click]) &&
         confidence(click) >= options_.least_confidence &&
         measured_[most_eased(click)].certainty() >= options_.least_confidence &&
         share_of_way(tried_.of_clicks[click], most_eased(click)) >= least_way_share;
}

std::optional<std::size_t> Choice::best_click() const {
  std::vector<std::size_t> fit;
  double most = 0.0;
  for (std::size_t k = 0; k < tried_.clicks.size(); ++k) {
    if (!fit_for_a_step(k)) continue;
    fit.push_back(k);
    most = std::max(most, benefit(k));
  }
  std::optional<std::size_t> best;
  const auto size = [&](std::size_t k) {
    return std::abs(tried_.clicks[k].to - tried_.clicks[k].range.setting);
  };
  for (const std::size_t k : fit) {
    if (benefit(k) < (1.0 - equal_share) * most) continue;
    if (!best || size(k) < size(*best) || (size(k) == size(*best) && benefit(k) > benefit(*best)))
      best = k;
  }
  return best;
}

double Choice::share_of_way(const Outcome& outcome, std::size_t symptom) const {
  return std::clamp(1.0 - outcome.mean(symptom) / tried_.now[symptom], 0.0, 1.0);
}

std::string Choice::why(std::size_t click) const {
  const Outcome& outcome = tried_.of_clicks[click];
  const std::size_t eased = most_eased(click);
  const Symptom& symptom = measured_[eased];
  std::string text =
      fmt::format("{} {:.3g} {} (aim {:.3g}, 90 % interval {:.3g} to {:.3g})", words(symptom.kind),
                  symptom.value, unit(symptom.kind), symptom.aim, symptom.low, symptom.high);
  if (symptom.kind == SymptomKind::rides_deep || symptom.kind == SymptomKind::rides_high)
    text += fmt::format(", where spring and weight alone would put it at {:.3g}",
                        *static_sag_percent(ride_));
  text += fmt::format("; ridden again over the same ground it comes {:.0f} % of the way to its aim",
                      100.0 * share_of_way(outcome, eased));
  for (std::size_t k = 0; k < measured_.size(); ++k)
    if (k != eased && eases(outcome, k))
      text += fmt::format("; it also eases: {}", words(measured_[k].kind));
  for (std::size_t k = 0; k < measured_.size(); ++k)
    if (outcome.mean(k) > tried_.now[k] + worth_watching)
      text += fmt::format("; watch for: {}", words(measured_[k].kind));
  return text + doubt_words(*ride_.damper, tried_.clicks[click].range);
}

Step Choice::step_of(std::size_t click) const {
  const ClickTrial& trial = tried_.clicks[click];
  Step step;
  step.end = ride_.name;
  step.adjuster = trial.range.adjuster;
  step.from = trial.range.setting;
  step.to = trial.to;
  step.symptom = measured_[most_eased(click)];
  step.why = why(click);
  step.confidence = std::min(confidence(click), step.symptom.certainty());
  step.predicted = predictions(tried_.result.predictions[click], tried_.result.recorded);
  step.seed = options_.seed;
  return step;
}

bool Choice::eases(const Outcome& outcome, std::size_t symptom) const {
  return outcome.mean(symptom) < tried_.now[symptom] - least_benefit;
}

bool Choice::reaches(const Outcome& outcome, std::size_t symptom) const {
  return outcome.mean(symptom) <= (1.0 - reached_share) * tried_.now[symptom];
}

// Whether the end stands too deep or too high on its spring: clearly off, and not for clicks.
bool Choice::sag_is_off() const {
  for (std::size_t k = 0; k < measured_.size(); ++k) {
    const SymptomKind kind = measured_[k].kind;
    const bool mean_travel = kind == SymptomKind::rides_deep || kind == SymptomKind::rides_high;
    if (mean_travel && tried_.now[k] >= 1.0 && !tried_.for_clicks[k]) return true;
  }
  return false;
}

// The part that takes most severity away in all, of those that reach the symptom and make none
// clearly worse; between equals the one that a setter turns to first. Where the sag is off, nothing
// but the spring: what it leaves shows on the next ride.
std::optional<std::size_t> Choice::best_part(std::size_t symptom) const {
  const auto gain = [&](std::size_t p) {
    double sum = 0.0;
    for (std::size_t k = 0; k < measured_.size(); ++k)
      sum += tried_.now[k] - tried_.of_parts[p].mean(k);
    return sum;
  };
  std::optional<std::size_t> best;
  const bool spring_only = sag_is_off();
  for (std::size_t p = 0; p < tried_.parts.size(); ++p) {
    const Outcome& outcome = tried_.of_parts[p];
    if (spring_only && tried_.parts[p].part != "spring") continue;
    if (part_for(measured_[symptom].kind) != tried_.parts[p].firmer) continue;
    if (!reaches(outcome, symptom) || makes_worse(outcome)) continue;
    if (!best || (1.0 - equal_share) * gain(p) > gain(*best)) best = p;
  }
  return best;
}

// A clear symptom that the advised step does not ease goes to the part that eases it most.
std::optional<Handover> Choice::handover_of(std::size_t symptom,
                                            const std::optional<std::size_t>& step) const {
  const Symptom& one = measured_[symptom];
  if (tried_.now[symptom] < 1.0 || one.certainty() < options_.least_confidence) return std::nullopt;
  if (step && eases(tried_.of_clicks[*step], symptom)) return std::nullopt;
  const std::optional<std::size_t> best = best_part(symptom);
  const Receiver& usual = receiver_of(one.kind);
  if (!best) return Handover{one, usual.to, usual.why};
  const PartTrial& part = tried_.parts[*best];
  return Handover{one, part.part,
                  fmt::format("{}{} would take it {:.0f} % of the way to its aim",
                              step ? "" : "no click brings it there; ", part.words,
                              100.0 * share_of_way(tried_.of_parts[*best], symptom))};
}

std::string what_to_check(const EndRide& ride, double carried_share) {
  return fmt::format(
      "{0}: by the bike file its wheel would carry {1:.2f} times its weight at the travel in the "
      "log, "
      "which cannot be, so no step is named; check rider.mass_kg, chassis.front_share, "
      "{0}.spring{2} "
      "the zero of {0}.sensor's calibration",
      bike::to_string(ride.name), carried_share,
      ride.damper->assumed() ? ", the damper, which is assumed, and" : " and");
}

EndChoice Choice::choose() const {
  EndChoice choice;
  if (!tried_.result.carries_its_weight()) {
    choice.check = what_to_check(ride_, tried_.result.carried_share);
    return choice;
  }
  const std::optional<std::size_t> best = best_click();
  if (best) choice.step = step_of(*best);
  for (std::size_t k = 0; k < measured_.size(); ++k)
    if (const auto handover = handover_of(k, best)) choice.handovers.push_back(*handover);
  return choice;
}

}  // namespace

EndChoice choose_by_replay(const EndRide& ride, const std::vector<Symptom>& measured,
                           const AdviceOptions& options) {
  return Choice(ride, measured, options).choose();
}

}  // namespace clickwise::advice
