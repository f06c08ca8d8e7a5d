#include "replay_choice.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numeric>

#include "clickwise/advice/find_symptoms.hpp"
#include "clickwise/core/units.hpp"
#include "packing.hpp"
#include "rules.hpp"
#include "trials.hpp"
#include "yardstick.hpp"

namespace clickwise::advice {

namespace {

// A symptom counts as made clearly worse when its severity rises by more than this.
constexpr double clearly_worse = 1.0;
// A step must lower the summed severity by at least this, and a symptom is reached when it falls by
// at least this share.
constexpr double least_benefit = 0.5;
constexpr double reached_share = 0.3;
// Moves whose benefits differ by less than this share count as equal; the smaller one is advised.
constexpr double equal_share = 0.1;
constexpr double assumed_curve_confidence = 0.85;
constexpr std::size_t packing_draws = 3;

// One trial's severities by draw and symptom, and what they sum to.
struct Outcome {
  std::vector<std::vector<double>> severity;  // [draw][symptom]

  double mean(std::size_t symptom) const {
    double sum = 0.0;
    for (const auto& draw : severity) sum += draw[symptom];
    return sum / static_cast<double>(severity.size());
  }
};

class Trial {
public:
  Trial(const EndRide& ride, const std::vector<Symptom>& measured, const AdviceOptions& options)
      : ride_(ride),
        measured_(measured),
        options_(options),
        clicks_(click_trials(ride, options.most_clicks)),
        parts_(part_trials(ride)) {
    replay();
  }

  EndChoice choose() const;

private:
  void replay();
  void add_packing(const std::vector<sim::VehicleEnd>& settings);
  double benefit(const Outcome& outcome) const;
  double confidence(const Outcome& outcome) const;
  bool makes_worse(const Outcome& outcome) const;
  std::optional<std::size_t> best_click() const;
  std::size_t most_eased(const Outcome& outcome) const;
  Step step_of(std::size_t click) const;
  std::optional<Handover> handover_of(std::size_t symptom,
                                      const std::optional<std::size_t>& step) const;
  std::string part_words(std::size_t symptom, std::size_t part) const;

  const EndRide& ride_;
  const std::vector<Symptom>& measured_;
  const AdviceOptions& options_;
  std::vector<ClickTrial> clicks_;
  std::vector<PartTrial> parts_;
  sim::ReplayResult result_;
  std::vector<double> now_;        // severity of each symptom as recorded
  std::vector<Outcome> outcomes_;  // clicks first, then parts
};

sim::ReplayInput replay_input(const EndRide& ride) {
  return {*ride.vehicle,
          ride.motion->time.interval_s(),
          ride.motion->travel_m,
          ride.motion->velocity_m_s,
          ride.motion->valid,
          *ride.counted,
          {ride.compression_split_m_s, ride.rebound_split_m_s},
          ride.end->bottom_out_within_m};
}

// The recorded figure, moved by what the model says would change; rates stay above zero.
double value_then(const Symptom& symptom, const EndRide& ride, const sim::VehicleEnd& setting,
                  const sim::EndFigures& now, const sim::EndFigures& then) {
  if (symptom.kind == SymptomKind::wallows) {
    const auto damping = body_damping_ratio(ride, setting.curve);
    return damping ? *damping : symptom.value;
  }
  const double change = modelled_value(symptom.kind, then, setting.curve.compression, ride) -
                        modelled_value(symptom.kind, now, ride.vehicle->curve.compression, ride);
  if (!std::isfinite(change)) return symptom.value;
  return std::max(0.0, symptom.value + change);
}

void Trial::replay() {
  std::vector<sim::VehicleEnd> settings;
  for (const ClickTrial& trial : clicks_) settings.push_back(trial.end);
  for (const PartTrial& trial : parts_) settings.push_back(trial.end);
  sim::ReplayOptions options;
  options.ensemble.seed = options_.seed;
  result_ = sim::replay(replay_input(ride_), settings, options);
  for (const Symptom& symptom : measured_) now_.push_back(severity_at(symptom, symptom.value));
  for (std::size_t k = 0; k < settings.size(); ++k) {
    Outcome outcome;
    for (std::size_t d = 0; d < result_.modelled_by_draw.size(); ++d) {
      std::vector<double> severities;
      for (const Symptom& symptom : measured_)
        severities.push_back(severity_at(
            symptom, value_then(symptom, ride_, settings[k], result_.modelled_by_draw[d],
                                result_.predictions[k].by_draw[d])));
      outcome.severity.push_back(std::move(severities));
    }
    outcomes_.push_back(std::move(outcome));
  }
  add_packing(settings);
}

// Hit trains need the ride itself, so they are only looked at when they are off their aim.
void Trial::add_packing(const std::vector<sim::VehicleEnd>& settings) {
  const auto packs = std::find_if(measured_.begin(), measured_.end(), [](const Symptom& symptom) {
    return symptom.kind == SymptomKind::packs_down && symptom.severity >= 1.0;
  });
  if (packs == measured_.end()) return;
  const auto symptom = static_cast<std::size_t>(packs - measured_.begin());
  std::vector<std::size_t> rebound;
  std::vector<sim::VehicleEnd> tried{*ride_.vehicle};
  for (std::size_t k = 0; k < clicks_.size(); ++k) {
    if (bike::acts_in_compression(clicks_[k].adjuster)) continue;
    rebound.push_back(k);
    tried.push_back(settings[k]);
  }
  sim::EnsembleOptions ensemble;
  ensemble.seed = options_.seed;
  std::vector<sim::Draw> draws = sim::draw_ensemble(ensemble, ride_.damper->assumed());
  draws.resize(std::min(draws.size(), packing_draws));
  const auto climbs = modelled_climbs(ride_, tried, draws);
  for (std::size_t j = 0; j < rebound.size(); ++j) {
    Outcome& outcome = outcomes_[rebound[j]];
    for (std::size_t d = 0; d < outcome.severity.size(); ++d) {
      const std::vector<double>& of_draw = climbs[d % climbs.size()];
      outcome.severity[d][symptom] =
          severity_at(*packs, packs->value + core::to_mm(of_draw[j + 1] - of_draw[0]));
    }
  }
}

double Trial::benefit(const Outcome& outcome) const {
  double sum = 0.0;
  for (std::size_t k = 0; k < now_.size(); ++k) sum += now_[k] - outcome.mean(k);
  return sum;
}

// Share of the draws in which the step helps, by Laplace's rule of succession, so that a dozen
// draws never make it certain.
double Trial::confidence(const Outcome& outcome) const {
  const double before = std::accumulate(now_.begin(), now_.end(), 0.0);
  double helps = 0.0;
  for (const auto& draw : outcome.severity)
    helps += std::accumulate(draw.begin(), draw.end(), 0.0) < before - 1e-9 ? 1.0 : 0.0;
  const double share = (helps + 1.0) / (static_cast<double>(outcome.severity.size()) + 2.0);
  return share * (ride_.damper->assumed() ? assumed_curve_confidence : 1.0);
}

bool Trial::makes_worse(const Outcome& outcome) const {
  for (std::size_t k = 0; k < now_.size(); ++k)
    if (outcome.mean(k) > now_[k] + clearly_worse) return true;
  return false;
}

std::size_t Trial::most_eased(const Outcome& outcome) const {
  std::size_t best = 0;
  for (std::size_t k = 1; k < now_.size(); ++k)
    if (now_[k] - outcome.mean(k) > now_[best] - outcome.mean(best)) best = k;
  return best;
}

std::optional<std::size_t> Trial::best_click() const {
  std::vector<std::size_t> fit;
  double most = 0.0;
  for (std::size_t k = 0; k < clicks_.size(); ++k) {
    const Outcome& outcome = outcomes_[k];
    const double gain = benefit(outcome);
    if (gain < least_benefit || makes_worse(outcome) ||
        confidence(outcome) < options_.least_confidence ||
        measured_[most_eased(outcome)].certainty() < options_.least_confidence)
      continue;
    fit.push_back(k);
    most = std::max(most, gain);
  }
  std::optional<std::size_t> best;
  const auto size = [&](std::size_t k) { return std::abs(clicks_[k].to - clicks_[k].from); };
  for (const std::size_t k : fit) {
    if (benefit(outcomes_[k]) < (1.0 - equal_share) * most) continue;
    if (!best || size(k) < size(*best) ||
        (size(k) == size(*best) && benefit(outcomes_[k]) > benefit(outcomes_[*best])))
      best = k;
  }
  return best;
}

// As recorded, and moved by what the model says: the numbers a rider can check on the next run.
std::vector<Prediction> predictions(const sim::Prediction& predicted,
                                    const sim::EndFigures& recorded) {
  std::vector<Prediction> moved;
  for (std::size_t m = 0; m < sim::metrics; ++m) {
    const auto metric = static_cast<sim::Metric>(m);
    const sim::Change& change = predicted.change(metric);
    const bool moves = change.low > 0.0 || change.high < 0.0;
    if (!moves && metric != sim::Metric::bottom_outs) continue;
    const double scale = sim::units_per_si(metric);
    const double now = scale * recorded.value(metric);
    const auto then = [&](double by) { return std::max(0.0, now + scale * by); };
    moved.push_back(
        {sim::to_string(metric), now, then(change.change), then(change.low), then(change.high)});
  }
  return moved;
}

Step Trial::step_of(std::size_t click) const {
  const ClickTrial& trial = clicks_[click];
  const Outcome& outcome = outcomes_[click];
  Step step;
  step.end = ride_.name;
  step.adjuster = trial.adjuster;
  step.from = trial.from;
  step.to = trial.to;
  step.symptom = measured_[most_eased(outcome)];
  step.confidence = std::min(confidence(outcome), step.symptom.certainty());
  step.predicted = predictions(result_.predictions[click], result_.recorded);
  const std::size_t eased = most_eased(outcome);
  step.why = fmt::format(
      "{} {:.3g} {} (aim {:.3g}, 90 % interval {:.3g} to {:.3g}); ridden again over the same "
      "ground "
      "it comes {:.0f} % of the way to its aim",
      words(step.symptom.kind), step.symptom.value, unit(step.symptom.kind), step.symptom.aim,
      step.symptom.low, step.symptom.high,
      100.0 * std::clamp(1.0 - outcome.mean(eased) / now_[eased], 0.0, 1.0));
  for (std::size_t k = 0; k < now_.size(); ++k) {
    if (k == eased || now_[k] <= 0.0 || outcome.mean(k) >= now_[k] - least_benefit) continue;
    step.why += fmt::format("; it also eases: {}", words(measured_[k].kind));
  }
  for (std::size_t k = 0; k < now_.size(); ++k) {
    if (outcome.mean(k) <= now_[k] + 0.25) continue;
    step.why += fmt::format("; watch for: {}", words(measured_[k].kind));
  }
  return step;
}

std::string Trial::part_words(std::size_t symptom, std::size_t part) const {
  const Outcome& outcome = outcomes_[clicks_.size() + part];
  return fmt::format("no click brings it to its aim; {} would take it {:.0f} % of the way",
                     parts_[part].words,
                     100.0 * std::clamp(1.0 - outcome.mean(symptom) / now_[symptom], 0.0, 1.0));
}

// A clear symptom that the advised step does not reach goes to the part that eases it most.
std::optional<Handover> Trial::handover_of(std::size_t symptom,
                                           const std::optional<std::size_t>& step) const {
  const Symptom& one = measured_[symptom];
  if (now_[symptom] < 1.0 || one.certainty() < options_.least_confidence) return std::nullopt;
  const double enough = (1.0 - reached_share) * now_[symptom];
  if (step && outcomes_[*step].mean(symptom) <= enough) return std::nullopt;
  std::optional<std::size_t> best;
  for (std::size_t p = 0; p < parts_.size(); ++p) {
    const double then = outcomes_[clicks_.size() + p].mean(symptom);
    if (then <= enough && (!best || then < outcomes_[clicks_.size() + *best].mean(symptom)))
      best = p;
  }
  if (best) return Handover{one, parts_[*best].part, part_words(symptom, *best)};
  const Receiver& receiver = receiver_of(one.kind);
  return Handover{one, receiver.to, receiver.why};
}

EndChoice Trial::choose() const {
  EndChoice choice;
  const std::optional<std::size_t> best = best_click();
  if (best) choice.step = step_of(*best);
  for (std::size_t k = 0; k < measured_.size(); ++k)
    if (const auto handover = handover_of(k, best)) choice.handovers.push_back(*handover);
  return choice;
}

}  // namespace

EndChoice choose_by_replay(const EndRide& ride, const std::vector<Symptom>& measured,
                           const AdviceOptions& options) {
  return Trial(ride, measured, options).choose();
}

}  // namespace clickwise::advice
