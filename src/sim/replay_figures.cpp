#include "replay_figures.hpp"

#include <algorithm>
#include <cmath>
#include <string_view>

namespace clickwise::sim {

const char* to_string(Metric metric) {
  constexpr const char* names[metrics] = {"bands.compression.high_share",
                                          "bands.compression.p95_mm_s",
                                          "bands.compression.high_j",
                                          "bands.rebound.high_share",
                                          "bands.rebound.p95_mm_s",
                                          "bands.rebound.high_j",
                                          "travel.mean_mm",
                                          "travel.p95_mm",
                                          "bottom_outs"};
  return names[static_cast<std::size_t>(metric)];
}

double units_per_si(Metric metric) {
  const std::string_view name = to_string(metric);
  return name.ends_with("_mm") || name.ends_with("_mm_s") ? 1000.0 : 1.0;
}

double EndFigures::value(Metric metric) const {
  switch (metric) {
    case Metric::compression_high_share:
      return bands[0].high_s / seconds;
    case Metric::compression_p95:
      return bands[0].p95_m_s;
    case Metric::compression_high_j:
      return bands[0].high_j;
    case Metric::rebound_high_share:
      return bands[1].high_s / seconds;
    case Metric::rebound_p95:
      return bands[1].p95_m_s;
    case Metric::rebound_high_j:
      return bands[1].high_j;
    case Metric::travel_mean:
      return travel_mean_m;
    case Metric::travel_p95:
      return travel_p95_m;
    case Metric::bottom_outs:
      return static_cast<double>(bottom_outs.size());
  }
  return NAN;
}

EndFigures end_figures(Tally tally, const TallyPlan& plan) {
  const BlockTally sum = tally.total();
  EndFigures figures;
  figures.seconds = sum.samples * plan.interval_s;
  constexpr auto still_cells = static_cast<std::size_t>(0.02 / Tally::speed_cell_m_s);
  for (const auto& cells : tally.speed)
    for (std::size_t i = 0; i < still_cells; ++i) figures.still_s += cells[i] * plan.interval_s;
  for (std::size_t d = 0; d < directions; ++d)
    figures.bands[d] = {.low_s = (sum.moving[d] - sum.high[d]) * plan.interval_s,
                        .high_s = sum.high[d] * plan.interval_s,
                        .low_j = sum.low_j[d],
                        .high_j = sum.high_j[d],
                        .p50_m_s = tally.speed_quantile_m_s(d, 0.50),
                        .p95_m_s = tally.speed_quantile_m_s(d, 0.95),
                        .max_m_s = sum.moving[d] > 0.0 ? tally.max_m_s[d] : NAN};
  figures.travel_mean_m = sum.travel_m / sum.samples;
  figures.travel_p50_m = tally.travel_quantile_m(0.50);
  figures.travel_p95_m = tally.travel_quantile_m(0.95);
  figures.travel_max_m = tally.max_travel_m;
  figures.bottom_outs = std::move(tally.bottom_outs);
  figures.top_outs = std::move(tally.top_outs);
  return figures;
}

namespace {

// Share of the time per unit of the figure, about its p95.
double speed_density(const Tally& tally, std::size_t d, double at_m_s, double samples) {
  constexpr std::size_t reach = 5;
  const auto cell = static_cast<std::size_t>(at_m_s / Tally::speed_cell_m_s);
  const std::size_t from = cell > reach ? cell - reach : 0;
  const std::size_t to = std::min(cell + reach + 1, Tally::speed_cells);
  double sum = 0.0;
  for (std::size_t i = from; i < to; ++i) sum += tally.speed[d][i];
  return sum / samples / (static_cast<double>(to - from) * Tally::speed_cell_m_s);
}

double travel_density(const Tally& tally, double at_m) {
  constexpr double reach_m = 5e-3;
  return (tally.share_below_travel(at_m + reach_m) - tally.share_below_travel(at_m - reach_m)) /
         (2.0 * reach_m);
}

double over(double part, double whole) {
  return whole > 0.0 ? part / whole : 0.0;
}

// First-order effect of a block on each figure: sums to zero over the blocks.
std::vector<std::array<double, metrics>> influences(const Tally& tally, const TallyPlan& plan) {
  const BlockTally sum = tally.total();
  std::vector<std::array<double, metrics>> all;
  double density[directions];
  double tail[directions];
  for (std::size_t d = 0; d < directions; ++d) {
    density[d] = speed_density(tally, d, plan.tail_m_s[d], sum.moving[d]);
    tail[d] = over(sum.tail[d], sum.moving[d]);
  }
  const double deep = travel_density(tally, plan.tail_travel_m);
  for (const BlockTally& block : tally.blocks) {
    std::array<double, metrics> one{};
    for (std::size_t d = 0; d < directions; ++d) {
      const std::size_t at = 3 * d;
      one[at] = over(block.high[d] - over(sum.high[d], sum.samples) * block.samples, sum.samples);
      one[at + 1] = over(block.tail[d] - tail[d] * block.moving[d], sum.moving[d] * density[d]);
      one[at + 2] = block.high_j[d] - sum.high_j[d] * over(block.samples, sum.samples);
    }
    one[6] = over(block.travel_m - over(sum.travel_m, sum.samples) * block.samples, sum.samples);
    one[7] = over(block.tail_travel - over(sum.tail_travel, sum.samples) * block.samples,
                  sum.samples * deep);
    one[8] = block.bottom_outs - sum.bottom_outs * over(block.samples, sum.samples);
    all.push_back(one);
  }
  return all;
}

}  // namespace

LaneFigures lane_figures(Tally tally, const TallyPlan& plan, bool keep) {
  LaneFigures lane;
  if (keep) lane.influence = influences(tally, plan);
  lane.whole = end_figures(std::move(tally), plan);
  for (std::size_t m = 0; m < metrics; ++m)
    lane.values[m] = lane.whole.value(static_cast<Metric>(m));
  return lane;
}

}  // namespace clickwise::sim
