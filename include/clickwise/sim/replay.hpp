// The same ground with other settings: what would have changed, and how sure that is.
// docs/method/replay.md.
#pragma once

#include <array>
#include <cstdint>
#include <span>
#include <vector>

#include "clickwise/run/event.hpp"
#include "clickwise/sim/ensemble.hpp"
#include "clickwise/sim/inverse.hpp"
#include "clickwise/sim/lanes.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

// One end's logged ride on a uniform time base; all series of the same size. Travel and velocity
// are read only where valid is nonzero, and figures are taken only where counted is (riding time).
struct ReplayInput {
  VehicleEnd end;  // at the settings of the ride
  double interval_s = 0.0;
  std::span<const double> travel_m;
  std::span<const double> velocity_m_s;
  std::span<const std::uint8_t> valid;
  std::span<const std::uint8_t> counted;
  std::array<double, directions> split_m_s{0.7, 0.7};
  double bottom_out_within_m = 4e-3;
};

// The contract's metrics (section 5), in its order.
enum class Metric {
  compression_high_share,
  compression_p95,  // m/s
  compression_high_j,
  rebound_high_share,
  rebound_p95,
  rebound_high_j,
  travel_mean,  // m
  travel_p95,
  bottom_outs,
};
inline constexpr std::size_t metrics = 9;

// "bands.compression.high_share"
const char* to_string(Metric metric);

// The unit of that name over SI: 1000 for "..._mm" and "..._mm_s", otherwise 1.
double units_per_si(Metric metric);

struct BandFigures {
  double low_s = 0.0;
  double high_s = 0.0;
  double low_j = 0.0;
  double high_j = 0.0;
  double p50_m_s = 0.0;  // NaN without time in the direction
  double p95_m_s = 0.0;
  double max_m_s = 0.0;
};

struct EndFigures {
  std::array<BandFigures, directions> bands;
  double seconds = 0.0;
  double still_s = 0.0;        // at shaft speeds below 20 mm/s
  double travel_mean_m = 0.0;  // NaN without time
  double travel_p50_m = 0.0;
  double travel_p95_m = 0.0;
  double travel_max_m = 0.0;
  std::vector<run::EndStop> bottom_outs;
  std::vector<run::EndStop> top_outs;

  double value(Metric metric) const;
};

struct Change {
  double now = 0.0;   // modelled at the settings of the ride
  double then = 0.0;  // now + change
  double change = 0.0;
  double low = 0.0;  // 90 % bounds of the change on this very ground (R15)
  double high = 0.0;
  double run_low = 0.0;      // and on another run over ground of this kind: the ride's own sampling
  double run_high = 0.0;     // added (R16)
  double falls_share = 0.0;  // of the draws in which the figure falls; ties count half
};

struct Prediction {
  EndFigures figures;  // modelled, with the bike as it is written
  std::array<Change, metrics> changes{};
  std::vector<EndFigures> by_draw;  // of every bike of the ensemble, over the pieces they rode

  const Change& change(Metric metric) const { return changes[static_cast<std::size_t>(metric)]; }
};

// Off by more than this and masses or spring of the bike file cannot be right: a right bike comes
// within 2.5 % on invented rides (docs/accuracy.md).
inline constexpr double carried_tolerance = 0.12;

struct ReplayResult {
  EndFigures recorded;                       // of the same samples
  EndFigures modelled;                       // the settings of the ride, through the model
  std::vector<EndFigures> modelled_by_draw;  // the same at the settings of the ride
  std::vector<Prediction> predictions;       // one a candidate
  double travel_rms_m = 0.0;                 // modelled less recorded
  double velocity_rms_m_s = 0.0;
  double airborne_share = 0.0;  // of the replayed time: its ground is a guess
  double carried_share = 0.0;   // mean wheel force over the sprung weight; far from 1: masses or
                                // spring of the bike file cannot be right
  double replayed_s = 0.0;
  std::uint64_t seed = 0;

  // Whether the bike file can be right, by carried_share.
  bool carries_its_weight() const;
};

struct ReplayOptions {
  EnsembleOptions ensemble;
  InverseOptions inverse;
  double warm_up_s = 0.5;        // of each stretch: ridden but not counted
  double least_stretch_s = 2.0;  // shorter valid stretches are left out
  double block_s = 5.0;
  // Draws beyond the first ride at most about so much of a longer ride, in pieces spread evenly
  // over it: what a draw changes shows in minutes, and the rest would only cost time.
  double longest_ensemble_s = 180.0;
};

// Rides every candidate (other settings, springs, masses; same stroke and linkage) over the
// recovered ground, for every draw of the ensemble. Throws core::JobError when no stretch is long
// enough. Cost: inverse 0.1 us a draw and sample, lanes 15 ns a draw, candidate (in steps of
// lane_width) and sample, spread over the cores.
ReplayResult replay(const ReplayInput& input, std::span<const VehicleEnd> candidates,
                    const ReplayOptions& options = {});

}  // namespace clickwise::sim
