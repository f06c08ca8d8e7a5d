// The damper as it was ridden: its curve, friction and fade, from an accelerometer on the sprung
// side. docs/method/ride-alone.md, A1 to A9.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/law.hpp"

namespace clickwise::sim {

// What must be known of an end; the curve is what the bike file says of its damper, where it does.
struct ApparentEnd {
  double sprung_mass_kg = 0.0;  // > 0
  double stroke_m = 0.0;        // > 0
  double friction_n = 0.0;      // as the bike file says
  core::Polyline ratio = core::Polyline::constant(1.0);
  bike::Spring spring;
  std::optional<damper::Curve> curve;

  // Empty when the bike file lacks the end, its spring, or a mass.
  static std::optional<ApparentEnd> from(const bike::Bike& bike, bike::EndName name,
                                         const std::optional<damper::Curve>& curve);
};

// One end of a ride on a uniform time base; all series of the same size. Samples with counted 0,
// or whose felt acceleration is NaN, are left out.
struct SprungRide {
  double interval_s = 0.0;
  std::span<const double> travel_m;
  std::span<const double> velocity_m_s;
  std::span<const double> felt_m_s2;  // upwards, +g at rest
  std::span<const std::uint8_t> counted;
  double velocity_noise_m_s = 0.0;  // at rest
  double cutoff_hz = 0.0;           // of the velocity's smoother; 0: not known
};

struct ApparentOptions {
  double still_m_s = 0.012;     // at the wheel; slower: friction may hold with any force
  double margin_m = 2e-3;       // this close to the ends of the stroke the stops may carry
  double guard_s = 5e-3;        // and this long before and after
  double least_s = 0.3;         // a point of the curve needs so much riding nearest to it
  double longest_lag_s = 0.01;  // of the accelerometer against the travel sensor, either way
  double spring_told = 0.05;    // half width of the spring's share up to which it is believed
  double least_fade = 0.08;     // smaller changes over a ride are not called fade
};

// A figure with its 90 % interval.
struct Bounded {
  double value = 0.0;
  double low = 0.0;
  double high = 0.0;
};

struct ApparentPoint {
  double speed_m_s = 0.0;  // > 0, in its direction
  Bounded force_n;         // without friction, positive resists
  double seconds = 0.0;    // of riding nearest to it
  std::optional<double> bike_file_n;
};

struct FadeWindow {
  double t_s = 0.0;    // middle, from the first sample
  double share = 1.0;  // damping there over that of the whole ride
};

// A straight line through the windows: what the damping has changed by from the first to the last.
struct Fade {
  Bounded change;      // -0.2: a fifth less at the end than at the start
  bool clear = false;  // its 99 % interval leaves out 0, and it is at least least_fade
  std::vector<FadeWindow> windows;
};

struct ApparentDamper {
  std::string problem;          // why there is no curve, a sentence; empty when there is one
  double used_s = 0.0;          // riding that the figures rest on
  double mean_felt_m_s2 = 0.0;  // over all riding; g when unit, axis and zero are right
  double lag_s = 0.0;           // taken off: the accelerometer is later than the travel sensor
  double felt_rms_m_s2 = 0.0;   // of the measured acceleration about its mean
  std::optional<double> model_rms_m_s2;  // of measured less what the bike file's model says
  double apparent_rms_m_s2 = 0.0;        // of measured less the apparent damper's model
  Bounded spring_share;                  // see (A4): 1 when masses, accelerometer and spring agree
  bool spring_share_told = false;        // else taken as 1
  double offset_n = 0.0;                 // at the shaft: zeros of the accelerometer and the sensor
  Bounded friction_n;
  std::vector<ApparentPoint> compression;
  std::vector<ApparentPoint> rebound;
  std::optional<Fade> fade;  // empty when the ride is too short to tell
};

// Wrong sign, wrong unit and a channel that does not follow the suspension are named in `problem`.
// Intervals hold what the ride's own scatter leaves open, not a common scale error (a wrong mass
// or spring): docs/method/ride-alone.md, limits. O(samples). Throws std::invalid_argument when
// sizes differ.
ApparentDamper apparent_damper(const ApparentEnd& end, const SprungRide& ride,
                               const ApparentOptions& options = {});

}  // namespace clickwise::sim
