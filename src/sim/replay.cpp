#include "clickwise/sim/replay.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/statistics.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/forward.hpp"
#include "replay_bounds.hpp"
#include "replay_figures.hpp"

namespace clickwise::sim {

namespace {

// A valid stretch of the log, with the samples of it that are counted.
struct Part {
  std::size_t first = 0;
  std::size_t size = 0;
  std::vector<std::uint8_t> counted;
};

std::vector<Part> valid_parts(const ReplayInput& input, const ReplayOptions& options) {
  const auto least = static_cast<std::size_t>(options.least_stretch_s / input.interval_s);
  const auto warm_up = static_cast<std::size_t>(std::ceil(options.warm_up_s / input.interval_s));
  std::vector<Part> parts;
  for (std::size_t i = 0; i < input.valid.size(); ++i) {
    if (input.valid[i] == 0) continue;
    std::size_t end = i;
    while (end < input.valid.size() && input.valid[end] != 0) ++end;
    if (end - i >= std::max<std::size_t>(least, 4)) {
      Part part{i,
                end - i,
                {input.counted.begin() + static_cast<std::ptrdiff_t>(i),
                 input.counted.begin() + static_cast<std::ptrdiff_t>(end)}};
      std::fill_n(part.counted.begin(), std::min(warm_up, part.size), std::uint8_t{0});
      parts.push_back(std::move(part));
    }
    i = end;
  }
  return parts;
}

std::vector<SeriesStretch> recorded_parts(const ReplayInput& input,
                                          const std::vector<Part>& parts) {
  std::vector<SeriesStretch> series;
  for (const Part& part : parts)
    series.push_back({input.travel_m.subspan(part.first, part.size),
                      input.velocity_m_s.subspan(part.first, part.size), part.first, part.counted});
  return series;
}

std::vector<LaneStretch> recover(const ReplayInput& input, const std::vector<Part>& parts,
                                 const Draw& draw, InverseOptions options) {
  options.relief_m = draw.relief_m;
  options.longest_hop_s = draw.longest_hop_s;
  const VehicleEnd end = drawn(input.end, draw);
  std::vector<LaneStretch> stretches;
  for (const Part& part : parts)
    stretches.push_back(
        {recover_forcing(end,
                         {input.interval_s, input.travel_m.subspan(part.first, part.size),
                          input.velocity_m_s.subspan(part.first, part.size)},
                         options),
         part.first, part.counted});
  return stretches;
}

TallyPlan plan_of(const ReplayInput& input, const ReplayOptions& options) {
  TallyPlan plan;
  plan.interval_s = input.interval_s;
  plan.split_m_s = input.split_m_s;
  plan.stroke_m = input.end.stroke_m;
  plan.bottom_out_within_m = input.bottom_out_within_m;
  plan.block_s = options.block_s;
  return plan;
}

// How far the model at the settings of the ride is from the recording, and what the ground was.
void compare_with_recorded(const ReplayInput& input, const std::vector<LaneStretch>& stretches,
                           ReplayResult& result) {
  double travel = 0.0, velocity = 0.0, count = 0.0, load = 0.0, steps = 0.0, airborne = 0.0;
  for (const LaneStretch& stretch : stretches) {
    const Ridden ridden = ride_forward(input.end, stretch.forcing);
    for (std::size_t i = 0; i < ridden.travel_m.size(); ++i) {
      if (stretch.counted[i] == 0) continue;
      const std::size_t at = stretch.first_sample + i;
      travel += std::pow(ridden.travel_m[i] - input.travel_m[at], 2);
      velocity += std::pow(ridden.velocity_m_s[i] - input.velocity_m_s[at], 2);
      count += 1.0;
      if (i == 0) continue;
      for (std::size_t n = (i - 1) * stretch.forcing.substeps; n < i * stretch.forcing.substeps;
           ++n) {
        load += stretch.forcing.load_m_s2[n];
        airborne += stretch.forcing.airborne[n];
        steps += 1.0;
      }
    }
  }
  result.travel_rms_m = std::sqrt(travel / count);
  result.velocity_rms_m_s = std::sqrt(velocity / count);
  result.carried_share = load / steps / core::standard_gravity_m_s2;
  result.airborne_share = airborne / steps;
}

// All draws ride all settings: figures [draw][setting], the settings of the ride first.
class Ensemble {
public:
  Ensemble(const ReplayInput& input, std::span<const VehicleEnd> candidates,
           const std::vector<Draw>& draws)
      : draws_(draws) {
    settings_.push_back(input.end);
    settings_.insert(settings_.end(), candidates.begin(), candidates.end());
  }

  std::vector<std::vector<LaneFigures>> ride(const std::vector<std::vector<LaneStretch>>& stretches,
                                             const TallyPlan& plan) const {
    const std::size_t groups = (settings_.size() + lane_width - 1) / lane_width;
    std::vector<std::vector<LaneFigures>> figures(draws_.size());
    for (auto& row : figures) row.resize(settings_.size());
    core::parallel_for(draws_.size() * groups, [&](std::size_t job) {
      const std::size_t draw = job / groups;
      const std::size_t from = job % groups * lane_width;
      const std::size_t to = std::min(from + lane_width, settings_.size());
      std::vector<VehicleEnd> ends;
      for (std::size_t s = from; s < to; ++s) ends.push_back(drawn(settings_[s], draws_[draw]));
      auto tallies = ride_lanes(ends, stretches[draw], plan);
      for (std::size_t s = from; s < to; ++s)
        figures[draw][s] = lane_figures(std::move(tallies[s - from]), plan, draw == 0);
    });
    return figures;
  }

private:
  const std::vector<Draw>& draws_;
  std::vector<VehicleEnd> settings_;
};

}  // namespace

ReplayResult replay(const ReplayInput& input, std::span<const VehicleEnd> candidates,
                    const ReplayOptions& options) {
  const auto parts = valid_parts(input, options);
  TallyPlan plan = plan_of(input, options);
  ReplayResult result;
  result.seed = options.ensemble.seed;
  const auto series = recorded_parts(input, parts);
  Tally recorded = count_series(series, input.end.curve, plan);
  const double samples = recorded.total().samples;
  if (samples < 1.0)
    throw core::JobError({}, "no stretch of the ride is long enough to replay",
                         "log at least a few seconds without a gap");
  for (std::size_t d = 0; d < directions; ++d) {
    const double p95 = recorded.speed_quantile_m_s(d, 0.95);
    if (std::isfinite(p95)) plan.tail_m_s[d] = p95;
  }
  plan.tail_travel_m = recorded.travel_quantile_m(0.95);
  result.replayed_s = samples * input.interval_s;
  result.recorded = end_figures(std::move(recorded), plan);

  const auto draws = draw_ensemble(options.ensemble, input.end.curve.assumed);
  std::vector<std::vector<LaneStretch>> stretches(draws.size());
  core::parallel_for(draws.size(), [&](std::size_t d) {
    stretches[d] = recover(input, parts, draws[d], options.inverse);
  });
  compare_with_recorded(input, stretches[0], result);
  auto figures = Ensemble(input, candidates, draws).ride(stretches, plan);
  result.modelled = figures[0][0].whole;
  for (auto& draw : figures) result.modelled_by_draw.push_back(std::move(draw[0].whole));
  for (std::size_t c = 0; c < candidates.size(); ++c) {
    Prediction prediction;
    prediction.figures = figures[0][c + 1].whole;
    for (auto& draw : figures) prediction.by_draw.push_back(std::move(draw[c + 1].whole));
    for (std::size_t m = 0; m < metrics; ++m)
      prediction.changes[m] = change_of(static_cast<Metric>(m), figures, c + 1, result);
    result.predictions.push_back(std::move(prediction));
  }
  return result;
}

}  // namespace clickwise::sim
