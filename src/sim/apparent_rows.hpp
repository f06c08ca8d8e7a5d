// The ride as rows of a linear equation for the damper's curve, (A3). Private to sim.
#pragma once

#include <functional>
#include <utility>
#include <vector>

#include "clickwise/sim/apparent.hpp"

namespace clickwise::sim {

// What each sample carries that the fit does not change.
struct ApparentSamples {
  std::vector<double> spring_n;  // at the shaft
  std::vector<double> load_kg;   // sprung mass times ratio: force at the shaft per felt m/s^2
  std::vector<double> damper_n;  // what the bike file says of it, signed; 0 without a curve
  std::vector<std::uint8_t> usable;
  std::vector<int> block;  // of the sample; blocks are some seconds of usable riding
  int blocks = 0;
  double block_s = 0.0;
};

ApparentSamples prepare(const ApparentEnd& end, const SprungRide& ride,
                        const ApparentOptions& options);

// Speeds at which the curve is told, one list a direction (compression first), and how much riding
// each rests on.
struct Knots {
  std::vector<double> speed_m_s[2];
  std::vector<double> seconds[2];
  std::vector<double> blocks[2];  // effective number of blocks behind each

  std::size_t count() const { return speed_m_s[0].size() + speed_m_s[1].size(); }
};

Knots choose_knots(const ApparentEnd& end, const SprungRide& ride, const ApparentSamples& samples,
                   const ApparentOptions& options);

// One short window: y = share held + offset + friction sign + sum hats theta, (A3).
struct ApparentRow {
  double load_n = 0.0;    // y: measured, at the shaft
  double held_n = 0.0;    // by the spring
  double damper_n = 0.0;  // what the bike file says of the damper
  double sign = 1.0;      // of the velocity
  double felt_per_n = 0.0;
  int block = 0;
  std::size_t first = 0;                                  // sample in the middle of the window
  std::vector<std::pair<std::size_t, double>> hats = {};  // index over all knots, signed weight
};

// Calls `see` for each window of usable samples of one direction that lie below the last knot.
// `felt_m_s2` is the ride's, or shifted in time.
void each_row(const SprungRide& ride, std::span<const double> felt_m_s2,
              const ApparentSamples& samples, const Knots& knots,
              const std::function<void(const ApparentRow&)>& see);

}  // namespace clickwise::sim
