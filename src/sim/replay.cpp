#include "clickwise/sim/replay.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/errors.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/forward.hpp"
#include "replay_bounds.hpp"
#include "replay_figures.hpp"

namespace clickwise::sim {

bool ReplayResult::carries_its_weight() const {
  return std::abs(carried_share - 1.0) <= carried_tolerance;
}

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

double counted_samples(const std::vector<Part>& parts) {
  double sum = 0.0;
  for (const Part& part : parts)
    sum += static_cast<double>(
        std::count_if(part.counted.begin(), part.counted.end(), [](auto c) { return c != 0; }));
  return sum;
}

// Pieces of the parts spread evenly over the ride, about `longest_s` in all; the parts themselves
// where they are no longer.
std::vector<Part> pieces_of(const std::vector<Part>& parts, double interval_s,
                            const ReplayOptions& options) {
  double seconds = 0.0;
  for (const Part& part : parts) seconds += interval_s * static_cast<double>(part.size);
  if (seconds <= options.longest_ensemble_s) return parts;
  constexpr double piece_s = 20.0;
  const auto piece = static_cast<std::size_t>(piece_s / interval_s);
  const auto warm_up = static_cast<std::size_t>(std::ceil(options.warm_up_s / interval_s));
  const double every = seconds / options.longest_ensemble_s;
  std::vector<Part> pieces;
  double due = 0.0;
  for (const Part& part : parts)
    for (std::size_t at = 0; at + piece <= part.size; at += piece) {
      due += 1.0;
      if (due < every) continue;
      due -= every;
      const auto from = part.counted.begin() + static_cast<std::ptrdiff_t>(at);
      Part one{part.first + at, piece, {from, from + static_cast<std::ptrdiff_t>(piece)}};
      std::fill_n(one.counted.begin(), std::min(warm_up, piece), std::uint8_t{0});
      pieces.push_back(std::move(one));
    }
  return counted_samples(pieces) * interval_s < 0.5 * options.longest_ensemble_s ? parts : pieces;
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

// Settings side by side over the grounds of draws: figures [draw][setting].
class Rides {
public:
  Rides(const ReplayInput& input, std::span<const VehicleEnd> candidates, const TallyPlan& plan)
      : plan_(plan) {
    settings_.push_back(input.end);
    settings_.insert(settings_.end(), candidates.begin(), candidates.end());
  }

  std::vector<std::vector<LaneFigures>> ride(std::span<const Draw> draws,
                                             const std::vector<std::vector<LaneStretch>>& grounds,
                                             bool keep_first) const {
    const std::size_t groups = (settings_.size() + lane_width - 1) / lane_width;
    std::vector<std::vector<LaneFigures>> figures(draws.size());
    for (auto& row : figures) row.resize(settings_.size());
    core::parallel_for(draws.size() * groups, [&](std::size_t job) {
      const std::size_t draw = job / groups;
      const std::size_t from = job % groups * lane_width;
      const std::size_t to = std::min(from + lane_width, settings_.size());
      std::vector<VehicleEnd> ends;
      for (std::size_t s = from; s < to; ++s) ends.push_back(drawn(settings_[s], draws[draw]));
      auto tallies = ride_lanes(ends, grounds[draw], plan_);
      for (std::size_t s = from; s < to; ++s)
        figures[draw][s] =
            lane_figures(std::move(tallies[s - from]), plan_, keep_first && draw == 0);
    });
    return figures;
  }

private:
  TallyPlan plan_;
  std::vector<VehicleEnd> settings_;
};

std::vector<std::vector<LaneStretch>> recover_all(const ReplayInput& input,
                                                  const std::vector<Part>& parts,
                                                  std::span<const Draw> draws,
                                                  const InverseOptions& options) {
  std::vector<std::vector<LaneStretch>> grounds(draws.size());
  core::parallel_for(draws.size(),
                     [&](std::size_t d) { grounds[d] = recover(input, parts, draws[d], options); });
  return grounds;
}

// Counts the recording; the plan's tails begin where its own fastest and deepest 5 % do.
EndFigures count_recorded(const ReplayInput& input, const std::vector<Part>& parts,
                          TallyPlan& plan) {
  Tally recorded = count_series(recorded_parts(input, parts), input.end.curve, plan);
  if (recorded.total().samples < 1.0)
    throw core::JobError({}, "no stretch of the ride is long enough to replay",
                         "log at least a few seconds without a gap");
  for (std::size_t d = 0; d < directions; ++d) {
    const double p95 = recorded.speed_quantile_m_s(d, 0.95);
    if (std::isfinite(p95)) plan.tail_m_s[d] = p95;
  }
  plan.tail_travel_m = recorded.travel_quantile_m(0.95);
  return end_figures(std::move(recorded), plan);
}

void predict(EnsembleFigures& figures, ReplayResult& result) {
  result.modelled = figures.whole[0].whole;
  for (const auto& draw : figures.draws) result.modelled_by_draw.push_back(draw[0].whole);
  for (std::size_t s = 1; s < figures.whole.size(); ++s) {
    Prediction prediction;
    for (std::size_t m = 0; m < metrics; ++m)
      prediction.changes[m] = change_of(static_cast<Metric>(m), figures, s, result.recorded);
    for (const auto& draw : figures.draws) prediction.by_draw.push_back(draw[s].whole);
    prediction.figures = std::move(figures.whole[s].whole);
    result.predictions.push_back(std::move(prediction));
  }
}

}  // namespace

ReplayResult replay(const ReplayInput& input, std::span<const VehicleEnd> candidates,
                    const ReplayOptions& options) {
  const auto parts = valid_parts(input, options);
  TallyPlan plan = plan_of(input, options);
  ReplayResult result;
  result.seed = options.ensemble.seed;
  result.recorded = count_recorded(input, parts, plan);
  result.replayed_s = result.recorded.seconds;

  const auto draws = draw_ensemble(options.ensemble, input.end.curve.scatter_share);
  const std::span<const Draw> first(draws.data(), 1);
  const Rides rides(input, candidates, plan);
  const auto ground = recover_all(input, parts, first, options.inverse);
  compare_with_recorded(input, ground[0], result);
  EnsembleFigures figures;
  figures.whole = std::move(rides.ride(first, ground, true)[0]);
  if (draws.size() == 1) {
    figures.draws = {figures.whole};
  } else {
    const auto pieces = pieces_of(parts, input.interval_s, options);
    figures.whole_over_pieces = counted_samples(parts) / counted_samples(pieces);
    figures.draws = rides.ride(draws, recover_all(input, pieces, draws, options.inverse), false);
  }
  predict(figures, result);
  return result;
}

}  // namespace clickwise::sim
