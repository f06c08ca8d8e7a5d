#include "clickwise/sim/ensemble.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/sim/random.hpp"

namespace clickwise::sim {

namespace {

constexpr double usual_friction_n = 15.0;  // of a fork; common practice, no source

// A place in (0, 1) for each draw, one to each of as many equal strata, in random order.
std::vector<double> strata(std::size_t count, Random& random) {
  std::vector<double> places;
  for (std::size_t i = 0; i < count; ++i)
    places.push_back((static_cast<double>(i) + random.uniform()) / static_cast<double>(count));
  for (std::size_t i = count; i > 1; --i)
    std::swap(places[i - 1],
              places[static_cast<std::size_t>(random.uniform() * static_cast<double>(i))]);
  return places;
}

// Forces times `factor`.
damper::Law scaled(damper::Law law, double factor) {
  law.bleed_m_s /= std::sqrt(factor);
  law.opening_n *= factor;
  law.slope_n_s_m *= factor;
  law.port_n_s2_m2 *= factor;
  return law;
}

}  // namespace

std::vector<Draw> draw_ensemble(const EnsembleOptions& options, double damper_share) {
  std::vector<Draw> draws(std::max<std::size_t>(1, options.draws));
  Random random(options.seed, 31);
  const std::size_t count = draws.size() - 1;
  const auto spread = [&](auto&& set, double low, double high) {
    const auto places = strata(count, random);
    for (std::size_t i = 0; i < count; ++i) set(draws[i + 1], low + (high - low) * places[i]);
  };
  const double mass = options.sprung_mass_share, tyre = options.tyre_share;
  spread([](Draw& d, double f) { d.sprung_mass = f; }, 1.0 - mass, 1.0 + mass);
  spread([](Draw& d, double f) { d.tyre = f; }, 1.0 - tyre, 1.0 + tyre);
  spread([](Draw& d, double f) { d.friction = f; }, 0.0, options.most_friction);
  spread([](Draw& d, double f) { d.damper[0] = f; }, 1.0 - damper_share, 1.0 + damper_share);
  spread([](Draw& d, double f) { d.damper[1] = f; }, 1.0 - damper_share, 1.0 + damper_share);
  spread([](Draw& d, double f) { d.relief_m = f; }, options.least_relief_m, options.most_relief_m);
  spread([](Draw& d, double f) { d.longest_hop_s = f; }, options.longest_hop_s[0],
         options.longest_hop_s[1]);
  return draws;
}

VehicleEnd drawn(const VehicleEnd& end, const Draw& draw) {
  VehicleEnd other = end;
  other.sprung_mass_kg *= draw.sprung_mass;
  other.tyre.stiffness_n_m *= draw.tyre;
  const bool unknown = !(end.friction_n > 0.0) && draw.friction != 1.0;
  other.friction_n = draw.friction * (unknown ? usual_friction_n : end.friction_n);
  other.curve.compression = scaled(end.curve.compression, draw.damper[0]);
  other.curve.rebound = scaled(end.curve.rebound, draw.damper[1]);
  return other;
}

}  // namespace clickwise::sim
