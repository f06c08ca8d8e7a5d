#include <algorithm>
#include <cmath>
#include <numbers>

#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/random.hpp"

namespace clickwise::sim {

namespace {

constexpr double spacing_m = 0.01;
constexpr double margin_m = 5.0;
constexpr double fade_m = 3.0;
constexpr double blend_m = 2.0;
constexpr double fall_m = 0.10;  // length over which a drop falls

// Streams of the ground's seed (1, 2) and of the line's (3, 4).
enum Stream : std::uint64_t { common_roughness = 1, rock_gardens, own_roughness, own_features };

// The ground while it is laid: bumps lie side by side (the higher wins), shapes add.
struct Layers {
  std::vector<double> bumps;
  std::vector<double> shape;

  std::size_t index(double at_m) const {
    const double i = std::ceil((at_m + margin_m) / spacing_m);
    return static_cast<std::size_t>(std::clamp(i, 0.0, static_cast<double>(bumps.size())));
  }
};

double distance_at(std::size_t i) {
  return spacing_m * static_cast<double>(i) - margin_m;
}

void lay_bump(Layers& layers, const Rock& rock) {
  const std::size_t stop = layers.index(rock.at_m + rock.length_m);
  for (std::size_t i = layers.index(rock.at_m); i < stop; ++i) {
    const double u = (distance_at(i) - rock.at_m) / rock.length_m;
    const double trapezoid = std::min({1.0, 4.0 * u, 4.0 * (1.0 - u)});
    const double share = rock.flat_topped ? trapezoid : std::sin(std::numbers::pi * u);
    layers.bumps[i] = std::max(layers.bumps[i], rock.height_m * share);
  }
}

// Adds -height from at_m on, reached over fall_m.
void lay_fall(Layers& layers, double at_m, double height_m) {
  for (std::size_t i = layers.index(at_m); i < layers.shape.size(); ++i)
    layers.shape[i] -= height_m * std::min(1.0, (distance_at(i) - at_m) / fall_m);
}

// Lays one feature with this run's own changes.
struct FeatureLayer {
  Layers& layers;
  Random& rocks;
  Random& own;
  double change;

  double moved(double at_m) { return at_m + 0.5 * change * own.normal(); }
  double scaled(double height_m, double spread) {
    return height_m * std::max(0.0, 1.0 + spread * change * own.normal());
  }

  void operator()(const Rock& rock) {
    const double at = moved(rock.at_m);
    lay_bump(layers, {at, scaled(rock.height_m, 0.4), rock.length_m, rock.flat_topped});
  }

  void operator()(const RockGarden& garden) {
    const auto count = static_cast<long>(std::lround(garden.per_m * garden.length_m));
    for (long i = 0; i < count; ++i) {
      const double at = garden.at_m + garden.length_m * rocks.uniform();
      const double height = garden.height_m * (0.4 + 0.6 * rocks.uniform());
      const double length = 0.25 + 0.35 * rocks.uniform();
      (*this)(Rock{at, height, length, rocks.uniform() < 0.5});
    }
  }

  void operator()(const Roots& roots) {
    for (int i = 0; i < roots.count; ++i) {
      const double at = roots.at_m + roots.spacing_m * i;
      (*this)(Rock{at, roots.height_m, roots.length_m, false});
    }
  }

  void operator()(const Kicker& kicker) {
    const double height = scaled(kicker.height_m, 0.2);
    const std::size_t stop = layers.index(kicker.at_m + kicker.length_m);
    for (std::size_t i = layers.index(kicker.at_m); i < stop; ++i) {
      const double u = (distance_at(i) - kicker.at_m) / kicker.length_m;
      layers.shape[i] += height * u * u;
    }
    for (std::size_t i = stop; i < layers.shape.size(); ++i) layers.shape[i] += height;
    lay_fall(layers, kicker.at_m + kicker.length_m, height + scaled(kicker.drop_m, 0.2));
  }

  void operator()(const Drop& drop) { lay_fall(layers, drop.at_m, scaled(drop.height_m, 0.2)); }

  void operator()(const Compression& hollow) {
    const double depth = scaled(hollow.depth_m, 0.2);
    const std::size_t stop = layers.index(hollow.at_m + hollow.length_m);
    for (std::size_t i = layers.index(hollow.at_m); i < stop; ++i) {
      const double u = (distance_at(i) - hollow.at_m) / hollow.length_m;
      layers.shape[i] -= 0.5 * depth * (1.0 - std::cos(2.0 * std::numbers::pi * u));
    }
  }
};

double roughness_at(const GroundPlan& plan, double distance_m, double length_m) {
  if (distance_m < 0.0 || distance_m >= length_m) return 0.0;
  double roughness = plan.roughness_m3;
  for (const auto& section : plan.sections)
    if (distance_m >= section.from_m && distance_m < section.to_m) roughness = section.roughness_m3;
  return roughness;
}

double fade(double distance_m, double length_m) {
  return std::clamp(std::min(distance_m, length_m - distance_m) / fade_m, 0.0, 1.0);
}

// Amplitude against roughness 1 m^3, blended over blend_m by a running mean.
std::vector<double> amplitudes(const GroundPlan& plan, double length_m, std::size_t count) {
  std::vector<double> sum(count + 1, 0.0);
  for (std::size_t i = 0; i < count; ++i)
    sum[i + 1] = sum[i] + std::sqrt(roughness_at(plan, distance_at(i), length_m));
  const auto reach = static_cast<std::size_t>(0.5 * blend_m / spacing_m);
  std::vector<double> amplitude(count);
  for (std::size_t i = 0; i < count; ++i) {
    const std::size_t begin = i > reach ? i - reach : 0;
    const std::size_t end = std::min(count, i + reach + 1);
    amplitude[i] =
        fade(distance_at(i), length_m) * (sum[end] - sum[begin]) / static_cast<double>(end - begin);
  }
  return amplitude;
}

std::vector<double> unit_roughness(const GroundPlan& plan, std::size_t count) {
  auto heights = random_profile(1.0, plan.band, spacing_m, count, plan.seed, common_roughness);
  const double own = plan.line.change;
  if (!(own > 0.0)) return heights;
  const auto line = random_profile(1.0, plan.band, spacing_m, count, plan.line.seed, own_roughness);
  const double common = std::sqrt(std::max(0.0, 1.0 - own * own));
  for (std::size_t i = 0; i < count; ++i) heights[i] = common * heights[i] + own * line[i];
  return heights;
}

}  // namespace

WheelPath lay_ground(const GroundPlan& plan, double length_m) {
  const auto count = static_cast<std::size_t>((length_m + 2.0 * margin_m) / spacing_m) + 1;
  Layers layers{std::vector<double>(count, 0.0), std::vector<double>(count, 0.0)};
  Random rocks(plan.seed, rock_gardens);
  Random own(plan.line.seed, own_features);
  FeatureLayer layer{layers, rocks, own, plan.line.change};
  for (const auto& feature : plan.features) std::visit(layer, feature);
  const auto amplitude = amplitudes(plan, length_m, count);
  auto heights = unit_roughness(plan, count);
  for (std::size_t i = 0; i < count; ++i)
    heights[i] = amplitude[i] * heights[i] + layers.bumps[i] + layers.shape[i];
  return {-margin_m, spacing_m, std::move(heights)};
}

}  // namespace clickwise::sim
