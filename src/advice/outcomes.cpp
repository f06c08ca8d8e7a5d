#include "outcomes.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/advice/find_symptoms.hpp"
#include "clickwise/core/units.hpp"
#include "packing.hpp"
#include "rules.hpp"
#include "yardstick.hpp"

namespace clickwise::advice {

namespace {

constexpr std::size_t packing_draws = 3;

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

// One setting's ride beside the settings of the ride, over the same stretches.
struct Pair {
  const sim::EndFigures& now;
  const sim::EndFigures& then;
};

double modelled_change(const Symptom& symptom, const EndRide& ride, const sim::VehicleEnd& setting,
                       const Pair& pair) {
  return modelled_value(symptom.kind, pair.then, setting.curve.compression, ride) -
         modelled_value(symptom.kind, pair.now, ride.vehicle->curve.compression, ride);
}

// Each draw's figure under a setting; no figure falls below zero.
std::vector<double> values_then(const Symptom& symptom, const EndRide& ride,
                                const sim::VehicleEnd& setting, const sim::ReplayResult& result,
                                const sim::Prediction& prediction) {
  std::vector<double> values(prediction.by_draw.size(), symptom.value);
  if (symptom.kind == SymptomKind::wallows) {
    const auto damping = body_damping_ratio(ride, setting.curve);
    if (damping) std::fill(values.begin(), values.end(), *damping);
    return values;
  }
  const auto change = [&](const Pair& pair) {
    return modelled_change(symptom, ride, setting, pair);
  };
  const double whole = change({result.modelled, prediction.figures});
  if (!std::isfinite(whole)) return values;
  const double as_written = change({result.modelled_by_draw[0], prediction.by_draw[0]});
  for (std::size_t d = 0; d < values.size(); ++d) {
    const double differs = change({result.modelled_by_draw[d], prediction.by_draw[d]}) - as_written;
    values[d] = std::max(0.0, symptom.value + whole + differs);
  }
  return values;
}

Outcome outcome_of(const EndRide& ride, const std::vector<Symptom>& measured,
                   const sim::VehicleEnd& setting, const sim::ReplayResult& result,
                   const sim::Prediction& prediction) {
  Outcome outcome{std::vector(prediction.by_draw.size(), std::vector<double>(measured.size()))};
  for (std::size_t k = 0; k < measured.size(); ++k) {
    const auto values = values_then(measured[k], ride, setting, result, prediction);
    for (std::size_t d = 0; d < values.size(); ++d)
      outcome.severity[d][k] = severity_at(measured[k], values[d]);
  }
  return outcome;
}

// Hit trains need the ride itself, so they are only looked at when they are off their aim.
void add_packing(const EndRide& ride, const std::vector<Symptom>& measured,
                 const AdviceOptions& options, Outcomes& outcomes) {
  const auto packs = std::find_if(measured.begin(), measured.end(), [](const Symptom& symptom) {
    return symptom.kind == SymptomKind::packs_down && symptom.severity >= 1.0;
  });
  if (packs == measured.end()) return;
  const auto symptom = static_cast<std::size_t>(packs - measured.begin());
  std::vector<std::size_t> rebound;
  std::vector<sim::VehicleEnd> tried{*ride.vehicle};
  for (std::size_t k = 0; k < outcomes.clicks.size(); ++k) {
    if (bike::acts_in_compression(outcomes.clicks[k].range.adjuster)) continue;
    rebound.push_back(k);
    tried.push_back(outcomes.clicks[k].end);
  }
  sim::EnsembleOptions ensemble;
  ensemble.seed = options.seed;
  std::vector<sim::Draw> draws = sim::draw_ensemble(ensemble, ride.damper->scatter_share());
  draws.resize(std::min(draws.size(), packing_draws));
  const auto climbs = modelled_climbs(ride, tried, draws);
  for (std::size_t j = 0; j < rebound.size(); ++j) {
    Outcome& outcome = outcomes.of_clicks[rebound[j]];
    for (std::size_t d = 0; d < outcome.severity.size(); ++d) {
      const std::vector<double>& of_draw = climbs[d % climbs.size()];
      outcome.severity[d][symptom] =
          severity_at(*packs, packs->value + core::to_mm(of_draw[j + 1] - of_draw[0]));
    }
  }
}

}  // namespace

double Outcome::mean(std::size_t symptom) const {
  double sum = 0.0;
  for (const auto& draw : severity) sum += draw[symptom];
  return sum / static_cast<double>(severity.size());
}

std::vector<double> Outcome::means() const {
  std::vector<double> all;
  for (std::size_t k = 0; k < severity.front().size(); ++k) all.push_back(mean(k));
  return all;
}

double benefit_of_clicks(std::span<const std::uint8_t> for_clicks, std::span<const double> now,
                         std::span<const double> then) {
  double sum = 0.0;
  for (std::size_t k = 0; k < now.size(); ++k) {
    const double gain = now[k] - then[k];
    sum += for_clicks[k] ? gain : std::min(0.0, gain);
  }
  return sum;
}

Outcomes ride_trials(const EndRide& ride, const std::vector<Symptom>& measured,
                     const AdviceOptions& options) {
  Outcomes outcomes;
  outcomes.clicks = click_trials(ride, options.most_clicks);
  outcomes.parts = part_trials(ride);
  std::vector<sim::VehicleEnd> settings;
  for (const ClickTrial& trial : outcomes.clicks) settings.push_back(trial.end);
  for (const PartTrial& trial : outcomes.parts) settings.push_back(trial.end);
  sim::ReplayOptions replay_options;
  replay_options.ensemble.seed = options.seed;
  outcomes.result = sim::replay(replay_input(ride), settings, replay_options);
  for (const Symptom& symptom : measured) {
    outcomes.now.push_back(severity_at(symptom, symptom.value));
    outcomes.for_clicks.push_back(is_for_clicks(symptom, ride) ? 1 : 0);
  }
  for (std::size_t k = 0; k < settings.size(); ++k) {
    Outcome outcome =
        outcome_of(ride, measured, settings[k], outcomes.result, outcomes.result.predictions[k]);
    (k < outcomes.clicks.size() ? outcomes.of_clicks : outcomes.of_parts)
        .push_back(std::move(outcome));
  }
  add_packing(ride, measured, options, outcomes);
  return outcomes;
}

}  // namespace clickwise::advice
