// The trail: what lies along it, and the path a wheel's axle takes over it.
#pragma once

#include <cstdint>
#include <variant>
#include <vector>

#include "clickwise/sim/roughness.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::sim {

// Distances and heights in m along the trail; the mean slope of the hill is left out, so a drop
// lowers everything behind it for good.

// A bump: half a sine, or flat-topped with ramps of a quarter of its length.
struct Rock {
  double at_m = 0.0;  // its near edge
  double height_m = 0.0;
  double length_m = 0.0;
  bool flat_topped = false;
};

// Seeded rocks of 40 to 100 % of the height and 0.25 to 0.6 m length; where two lie, the higher.
struct RockGarden {
  double at_m = 0.0;
  double length_m = 0.0;
  double per_m = 1.0;
  double height_m = 0.0;
};

// `count` half sines at a constant spacing.
struct Roots {
  double at_m = 0.0;
  double height_m = 0.0;
  double length_m = 0.1;  // of one root
  double spacing_m = 0.6;
  int count = 1;
};

// A ramp that steepens (height grows with the square) and ends in a fall of height + drop.
struct Kicker {
  double at_m = 0.0;
  double height_m = 0.0;
  double length_m = 0.0;
  double drop_m = 0.0;
};

struct Drop {
  double at_m = 0.0;
  double height_m = 0.0;
};

// A hollow, one period of a cosine: the trail presses from below in its middle.
struct Compression {
  double at_m = 0.0;
  double depth_m = 0.0;
  double length_m = 0.0;
};

using Feature = std::variant<Rock, RockGarden, Roots, Kicker, Drop, Compression>;

// Roughness from one distance to another; 0 is smooth.
struct RoughSection {
  double from_m = 0.0;
  double to_m = 0.0;
  double roughness_m3 = 0.0;
};

// What differs between two runs over the same trail. `change` c (0 to 1) is the share of the line
// that is this run's own: roughness = sqrt(1 - c^2) common + c own, rocks and roots move by c/2 m
// and change height by 40 c % (one deviation), the big features by 20 c %.
struct Line {
  std::uint64_t seed = 0;
  double change = 0.0;
};

struct GroundPlan {
  std::uint64_t seed = 1;
  double roughness_m3 = 0.0;           // where no section says otherwise
  std::vector<RoughSection> sections;  // later ones win
  std::vector<Feature> features;
  Line line;
  SpatialBand band;
};

// The rolling contact: the axle of a rigid wheel rides on the envelope of its circle, and the
// patch averages over its length with a raised cosine. An approximation: the tyre's own wrapping
// round an edge is in the patch length only.
struct Rolling {
  double wheel_radius_m = 0.36;
  double patch_m = 0.10;
};

// Heights over distance on a uniform grid, straight between the points, level beyond both ends.
class WheelPath {
public:
  WheelPath(double from_m, double spacing_m, std::vector<double> heights);

  double height_m(double distance_m) const;
  // The wheel passes `distance_m` at `speed_m_s`.
  Ground at(double distance_m, double speed_m_s) const;

  double from_m() const { return from_m_; }
  double spacing_m() const { return spacing_m_; }
  const std::vector<double>& heights() const { return heights_; }

private:
  double from_m_;
  double spacing_m_;
  std::vector<double> heights_;
};

// The bare ground from -5 m to length_m + 5 m, every 10 mm, roughness faded in and out over the
// first and last 3 m of [0, length_m] and between sections over 2 m.
WheelPath lay_ground(const GroundPlan& plan, double length_m);

// The path of the axle over the ground, less the wheel's radius.
WheelPath rolled(const WheelPath& ground, const Rolling& rolling);

}  // namespace clickwise::sim
