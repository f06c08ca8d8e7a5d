#include "replay_bounds.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/statistics.hpp"

namespace clickwise::sim {

namespace {

constexpr double two_sided_90 = 1.6448536269514722;

// How much wider than its spread the ensemble must be taken for 90 % to mean 90 %: measured over
// invented rides with right and wrong bikes (docs/method/replay.md, R15; docs/accuracy.md).
constexpr double widening[metrics] = {1.4, 1.2, 1.25, 1.1, 1.0, 1.1, 1.0, 0.7, 1.0};

// A deviation that is always there: cells of the histograms, single precision, step. Shares, m/s, J
// as a share of the figure, m, counts.
constexpr double resolution[metrics] = {5e-5, 5e-4, 5e-4, 5e-5, 5e-4, 5e-4, 1e-5, 5e-5, 0.6};

double falls_share(const std::vector<double>& changes) {
  double falls = 0.0;
  for (const double change : changes) falls += change < 0.0 ? 1.0 : change > 0.0 ? 0.0 : 0.5;
  return falls / static_cast<double>(changes.size());
}

bool in_joules(Metric metric) {
  return metric == Metric::compression_high_j || metric == Metric::rebound_high_j;
}

// Grows with the length of the ride.
bool is_sum(Metric metric) {
  return in_joules(metric) || metric == Metric::bottom_outs;
}

// A model that gives x % less of a figure than was recorded may give x % less of its change.
double mismatch_deviation(double change, double modelled, double recorded) {
  const double scale = std::max(std::abs(modelled), std::abs(recorded));
  return scale > 0.0 ? std::abs(change) * std::abs(modelled - recorded) / scale : 0.0;
}

// Deviation that the block bootstrap of the difference of two rides tends to.
double sampling_deviation(const LaneFigures& now, const LaneFigures& then, std::size_t m) {
  double squares = 0.0;
  const double blocks = static_cast<double>(now.influence.size());
  for (std::size_t b = 0; b < now.influence.size(); ++b)
    squares += std::pow(then.influence[b][m] - now.influence[b][m], 2);
  return blocks > 1.0 ? std::sqrt(squares * blocks / (blocks - 1.0)) : 0.0;
}

// NaN deviation of a single draw counts as none.
double deviation_of(const core::MeanAndDeviation& spread) {
  return std::isfinite(spread.deviation) ? spread.deviation : 0.0;
}

}  // namespace

// The bike as written rides it all; what the other draws do differently is taken from their pieces.
Change change_of(Metric metric, const EnsembleFigures& figures, std::size_t setting,
                 const EndFigures& recorded) {
  const auto m = static_cast<std::size_t>(metric);
  const double scale = is_sum(metric) ? figures.whole_over_pieces : 1.0;
  std::vector<double> changes;
  for (const auto& draw : figures.draws)
    changes.push_back(scale * (draw[setting].values[m] - draw[0].values[m]));
  const double as_written = figures.whole[setting].values[m] - figures.whole[0].values[m];
  const double shift = as_written - changes[0];
  for (double& change : changes) change += shift;
  const auto spread = core::mean_and_deviation(changes);
  Change change;
  change.now = figures.whole[0].values[m];
  change.change = spread.mean;
  change.then = change.now + change.change;
  const double mismatch = mismatch_deviation(change.change, change.now, recorded.value(metric));
  const double least = resolution[m] * (in_joules(metric) ? change.now : 1.0);
  const double deviation =
      std::hypot(widening[m] * std::hypot(deviation_of(spread), mismatch), least);
  const double sampling = sampling_deviation(figures.whole[0], figures.whole[setting], m);
  const double half = two_sided_90 * deviation;
  const double run_half = two_sided_90 * std::hypot(deviation, sampling);
  change.low = change.change - half;
  change.high = change.change + half;
  change.run_low = change.change - run_half;
  change.run_high = change.change + run_half;
  change.falls_share = falls_share(changes);
  return change;
}

}  // namespace clickwise::sim
