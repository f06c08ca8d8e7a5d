#include "clickwise/sim/roughness.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>
#include <stdexcept>

#include "clickwise/sim/random.hpp"

namespace clickwise::sim {

namespace {

constexpr double two_pi = 2.0 * std::numbers::pi;

// Points between restarts of the turning phasors: rounding stays below 1e-12 of an amplitude.
constexpr std::size_t block_points = 4096;

struct Component {
  double per_m = 0.0;  // cycles
  double amplitude_m = 0.0;
  double phase = 0.0;
};

std::vector<Component> components_of(double roughness_m3, const SpatialBand& band, Random& random) {
  std::vector<Component> components(band.components);
  const double n = static_cast<double>(band.components);
  const double cell = std::log(band.high_per_m / band.low_per_m) / n;
  for (std::size_t i = 0; i < components.size(); ++i) {
    const double low = band.low_per_m * std::exp(cell * static_cast<double>(i));
    const double high = low * std::exp(cell);
    const double power = roughness_m3 * reference_frequency_per_m * reference_frequency_per_m *
                         (1.0 / low - 1.0 / high);
    components[i] = {std::sqrt(low * high), std::sqrt(2.0 * power), two_pi * random.uniform()};
  }
  return components;
}

// Phasors of all components, turned together from point to point.
struct Phasors {
  std::vector<double> re, im, turn_re, turn_im;

  explicit Phasors(std::size_t size) : re(size), im(size), turn_re(size), turn_im(size) {}

  double turn() {
    double sum = 0.0;
    const std::size_t size = re.size();
    for (std::size_t i = 0; i < size; ++i) sum += re[i];
    for (std::size_t i = 0; i < size; ++i) {
      const double next = re[i] * turn_re[i] - im[i] * turn_im[i];
      im[i] = re[i] * turn_im[i] + im[i] * turn_re[i];
      re[i] = next;
    }
    return sum;
  }
};

void aim(Phasors& phasors, const std::vector<Component>& components, double from_m,
         double spacing_m) {
  for (std::size_t i = 0; i < components.size(); ++i) {
    const auto& c = components[i];
    const double angle = c.phase + two_pi * c.per_m * from_m;
    phasors.re[i] = c.amplitude_m * std::cos(angle);
    phasors.im[i] = c.amplitude_m * std::sin(angle);
    phasors.turn_re[i] = std::cos(two_pi * c.per_m * spacing_m);
    phasors.turn_im[i] = std::sin(two_pi * c.per_m * spacing_m);
  }
}

}  // namespace

RoughnessClass roughness_class(char letter) {
  if (letter < 'A' || letter > 'H')
    throw std::invalid_argument("roughness_class: letter must be A to H");
  const double mean = 16e-6 * std::pow(4.0, letter - 'A');
  return {letter == 'A' ? 0.0 : 0.5 * mean, mean,
          letter == 'H' ? std::numeric_limits<double>::infinity() : 2.0 * mean};
}

std::vector<double> random_profile(double roughness_m3, const SpatialBand& band, double spacing_m,
                                   std::size_t count, std::uint64_t seed, std::uint64_t stream) {
  Random random(seed, stream);
  const auto components = components_of(roughness_m3, band, random);
  Phasors phasors(components.size());
  std::vector<double> heights(count);
  for (std::size_t begin = 0; begin < count; begin += block_points) {
    aim(phasors, components, spacing_m * static_cast<double>(begin), spacing_m);
    const std::size_t stop = std::min(count, begin + block_points);
    for (std::size_t i = begin; i < stop; ++i) heights[i] = phasors.turn();
  }
  return heights;
}

}  // namespace clickwise::sim
