// How well changes are predicted over invented rides whose truth is known: the same ground ridden
// with other clicks.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <vector>

#include "clickwise/core/parallel.hpp"
#include "clickwise/sim/replay.hpp"
#include "sim/replay_rides.hpp"

namespace clickwise::replay_rides {

// What the bike file has wrong: factors on the true values.
struct WrongBike {
  double sprung_mass = 1.0;
  double tyre = 1.0;
  double friction = 1.0;
};

// Nine moves, every adjuster both ways.
inline std::vector<Parts> moves(const Parts& base) {
  struct Move {
    bool compression, bleed;
    int clicks;
  };
  constexpr Move all[] = {{true, true, -3}, {true, true, 4},    {true, false, -2},
                          {true, false, 3}, {true, false, -5},  {false, true, -3},
                          {false, true, 4}, {false, false, -3}, {false, false, 3}};
  std::vector<Parts> settings;
  for (const Move& move : all) {
    Parts parts = base;
    auto& side = move.compression ? parts.damper.compression : parts.damper.rebound;
    (move.bleed ? side.bleed : side.valve)->setting += move.clicks;
    settings.push_back(parts);
  }
  return settings;
}

// A true change matters above these: 0.1 points of share, 10 mm/s, 0.3 mm, one bottom-out; joules
// have no threshold of their own.
inline constexpr std::array<double, sim::metrics> matters{1e-3,  0.01, 1e300, 1e-3, 0.01,
                                                          1e300, 3e-4, 3e-4,  0.5};

struct Score {
  struct Row {
    double square_error = 0.0;
    double square_true = 0.0;
    int changes = 0;
    int covered = 0;
    int mattering = 0;
    int right_sign = 0;

    double relative_error() const { return std::sqrt(square_error / square_true); }
    double coverage() const { return static_cast<double>(covered) / changes; }
    double sign_share() const { return static_cast<double>(right_sign) / mattering; }
  };
  std::array<Row, sim::metrics> rows;

  void add(std::size_t metric, double truth, const sim::Change& predicted) {
    Row& row = rows[metric];
    row.square_error += std::pow(predicted.change - truth, 2);
    row.square_true += truth * truth;
    ++row.changes;
    row.covered += truth >= predicted.low && truth <= predicted.high;
    if (std::abs(truth) < matters[metric]) return;
    ++row.mattering;
    row.right_sign += truth * predicted.change > 0.0;
  }
};

inline std::array<double, sim::metrics> metric_values(const Figures& f) {
  return {f.high_share[0], f.p95_m_s[0], f.high_j[0], f.high_share[1], f.p95_m_s[1],
          f.high_j[1],     f.mean_m,     f.p95_m,     f.bottom_outs};
}

inline sim::VehicleEnd as_written(Parts parts, const WrongBike& wrong) {
  parts.sprung_kg *= wrong.sprung_mass;
  parts.end.tyre->stiffness_n_m *= wrong.tyre;
  parts.end.friction_n *= wrong.friction;
  return parts.vehicle();
}

// Truth of a ride with its own clicks and with every move.
struct Case {
  Ride ride;
  std::vector<Parts> settings;  // the ride's own first
  std::vector<sim::EndTruth> truth;
  Log log;
  double split_m_s = 0.0;
};

inline Case case_number(int number, std::uint64_t set_seed, double seconds) {
  Case made{ride_number(number, set_seed, seconds), {}, {}, {}, 0.0};
  made.settings = moves(made.ride.parts);
  made.settings.insert(made.settings.begin(), made.ride.parts);
  made.truth.resize(made.settings.size());
  core::parallel_for(made.settings.size(),
                     [&](std::size_t i) { made.truth[i] = made.ride.truth(made.settings[i]); });
  made.log = log_of(made.truth[0], made.ride.parts.end.stroke_m,
                    set_seed + static_cast<std::uint64_t>(number));
  made.split_m_s = made.ride.parts.vehicle().curve.compression.knee_m_s();
  return made;
}

// Predicts every move from the log alone and scores it against the truth.
inline sim::ReplayResult score_case(const Case& made, const WrongBike& wrong, Score& score) {
  const std::vector<std::uint8_t> all(made.log.travel_m.size(), 1);
  const double within_m = made.ride.parts.end.bottom_out_within_m;
  const sim::ReplayInput input{.end = as_written(made.ride.parts, wrong),
                               .interval_s = 1e-3,
                               .travel_m = made.log.travel_m,
                               .velocity_m_s = made.log.velocity_m_s,
                               .valid = all,
                               .counted = all,
                               .split_m_s = {made.split_m_s, made.split_m_s},
                               .bottom_out_within_m = within_m};
  std::vector<sim::VehicleEnd> candidates;
  for (std::size_t i = 1; i < made.settings.size(); ++i)
    candidates.push_back(as_written(made.settings[i], wrong));
  const sim::ReplayOptions options;
  const auto first = static_cast<std::size_t>(options.warm_up_s * 1000.0);
  const auto truth = [&](std::size_t i) {
    return metric_values(figures(made.truth[i].travel_m, made.truth[i].velocity_m_s,
                                 made.settings[i].vehicle(), made.split_m_s, first, within_m));
  };
  auto result = sim::replay(input, candidates, options);
  const auto now = truth(0);
  for (std::size_t i = 1; i < made.settings.size(); ++i) {
    const auto then = truth(i);
    for (std::size_t m = 0; m < sim::metrics; ++m)
      score.add(m, then[m] - now[m], result.predictions[i - 1].changes[m]);
  }
  return result;
}

}  // namespace clickwise::replay_rides
