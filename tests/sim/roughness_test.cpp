#include "clickwise/sim/roughness.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <numbers>
#include <stdexcept>
#include <vector>

#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/random.hpp"
#include "clickwise/sim/vehicle.hpp"
#include "linear_end.hpp"

using namespace clickwise;
using namespace clickwise::sim;

namespace {

constexpr double pi = std::numbers::pi;
constexpr double spacing_m = 0.01;
constexpr std::size_t points = 200000;  // 2 km

std::vector<double> class_c() {
  return random_profile(roughness_class('C').mean_m3, {}, spacing_m, points, 7, 1);
}

double rms(const std::vector<double>& values) {
  double sum = 0.0;
  for (const double v : values) sum += v * v;
  return std::sqrt(sum / static_cast<double>(values.size()));
}

std::vector<double> speeds_at(const std::vector<double>& heights, double speed_m_s) {
  std::vector<double> v;
  for (std::size_t i = 2; i + 2 < heights.size(); ++i)  // fourth-order difference
    v.push_back((8.0 * (heights[i + 1] - heights[i - 1]) - heights[i + 2] + heights[i - 2]) /
                (12.0 * spacing_m) * speed_m_s);
  return v;
}

// One-sided power per cycle/m in [low, high], from Goertzel sums over Hann windows of 40 m.
double density_m3(const std::vector<double>& heights, double low, double high) {
  constexpr std::size_t window = 4000;
  const double bin = 1.0 / (spacing_m * window);
  double sum = 0.0;
  int count = 0;
  for (std::size_t begin = 0; begin + window <= heights.size(); begin += window / 2)
    for (double n = bin * std::ceil(low / bin); n <= high; n += bin) {
      double re = 0.0;
      double im = 0.0;
      for (std::size_t i = 0; i < window; ++i) {
        const double hann = 0.5 - 0.5 * std::cos(2.0 * pi * static_cast<double>(i) / window);
        const double angle = 2.0 * pi * n * spacing_m * static_cast<double>(i);
        re += hann * heights[begin + i] * std::cos(angle);
        im += hann * heights[begin + i] * std::sin(angle);
      }
      sum += 2.0 * spacing_m * (re * re + im * im) / (0.375 * window);
      ++count;
    }
  return sum / count;
}

}  // namespace

TEST_CASE("roughness classes are those of ISO 8608", "[sim]") {
  CHECK(roughness_class('A').mean_m3 == Approx(16e-6));
  CHECK(roughness_class('C').lower_m3 == Approx(128e-6));
  CHECK(roughness_class('E').mean_m3 == Approx(4096e-6));
  CHECK(roughness_class('H').mean_m3 == Approx(262144e-6));
  CHECK(roughness_class('G').upper_m3 == Approx(131072e-6));
  CHECK_THROWS_AS(roughness_class('I'), std::invalid_argument);
}

// Check values 5c, 5d, 5f for class C, 10 m/s, 0.05 to 10 per m. Over 2 km the longest components
// (spacing of a cell 5e-4 per m) are just resolved: 2 % on the height; slopes converge faster, but
// the difference quotient loses sin-wise at 10 per m: (2 pi n h)^4 / 30 = 0.5 % at the top.
TEST_CASE("a synthesised ground has the class's height, slope and crossing rate", "[sim]") {
  const auto heights = class_c();
  CHECK(rms(heights) == Approx(7.137506567e-3).epsilon(0.03));
  CHECK(rms(speeds_at(heights, 10.0)) == Approx(0.3171110615).epsilon(0.02));
  int crossings = 0;
  for (std::size_t i = 1; i < heights.size(); ++i)
    crossings += heights[i - 1] < 0.0 && heights[i] >= 0.0;
  const double ridden_s = spacing_m * points / 10.0;
  CHECK(crossings / ridden_s == Approx(7.071067812).epsilon(4.0 / std::sqrt(crossings)));
}

// Check values 5g: erf of the threshold over sqrt2 s_v; 4 standard errors with n_eff from the
// bandwidth: 10 m/s over 0.5 mean wavelength gives at least 4000 independent values.
TEST_CASE("speeds over a synthesised ground are Gaussian", "[sim]") {
  const auto v = speeds_at(class_c(), 10.0);
  double below = 0.0;
  for (const double value : v) below += std::abs(value) < 0.1;
  const double share = 0.2475017444;
  const double tolerance = 4.0 * std::sqrt(share * (1.0 - share) / 4000.0);
  CHECK(below / static_cast<double>(v.size()) == Approx(share).margin(tolerance));
}

TEST_CASE("the spectrum of a synthesised ground lies in its class at every octave", "[sim]") {
  const auto heights = random_profile(roughness_class('D').mean_m3, {}, spacing_m, 100000, 3, 1);
  for (const double n : {0.2, 0.4, 0.8, 1.6, 3.2}) {
    const double scale = (n / reference_frequency_per_m) * (n / reference_frequency_per_m);
    const double at_reference = density_m3(heights, n / 1.1, n * 1.1) * scale;
    CHECK(at_reference > roughness_class('D').lower_m3);
    CHECK(at_reference < roughness_class('D').upper_m3);
  }
}

// Check values 5i: a one-degree model on class C at 10 m/s, fn = 2 Hz, damping ratio 0.25, has
// 6.341 mm rms of travel (Newland, Random Vibrations). Simulated tolerance there: 5 %.
TEST_CASE("a one-degree model on class C travels as random vibration theory says", "[sim]") {
  constexpr double step_s = 2.5e-5;
  constexpr double speed_m_s = 10.0;
  const SpatialBand band{0.01, 10.0, 1024};
  const WheelPath path(0.0, spacing_m,
                       random_profile(roughness_class('C').mean_m3, band, spacing_m, points, 5, 1));
  const VehicleEnd end = sim_test::linear_end(sim_test::one_degree(2.0, 0.25));
  EndState state = at_rest(end, path.height_m(0.0));
  double sum = 0.0;
  const int steps = static_cast<int>(spacing_m * points / speed_m_s / step_s);
  const int settle = static_cast<int>(5.0 / step_s);
  for (int i = 0; i < steps; ++i) {
    step(end, state, path.at(speed_m_s * step_s * i, speed_m_s), step_s);
    const double travel = state.wheel_m - state.sprung_m - 0.2;
    if (i >= settle) sum += travel * travel;
  }
  CHECK(std::sqrt(sum / (steps - settle)) == Approx(6.341323676e-3).epsilon(0.05));
}

TEST_CASE("the same seed gives the same ground bit for bit, another seed another", "[sim]") {
  const auto a = random_profile(1e-3, {}, spacing_m, 5000, 11, 1);
  CHECK(a == random_profile(1e-3, {}, spacing_m, 5000, 11, 1));
  CHECK(a != random_profile(1e-3, {}, spacing_m, 5000, 12, 1));
  CHECK(a != random_profile(1e-3, {}, spacing_m, 5000, 11, 2));
}

TEST_CASE("normal deviates have mean 0, deviation 1 and Gaussian tails", "[sim]") {
  Random random(1);
  constexpr int count = 200000;
  double sum = 0.0;
  double squares = 0.0;
  int within = 0;
  for (int i = 0; i < count; ++i) {
    const double z = random.normal();
    sum += z;
    squares += z * z;
    within += std::abs(z) < 2.0;
  }
  CHECK(sum / count == Approx(0.0).margin(4.0 / std::sqrt(count)));
  CHECK(squares / count == Approx(1.0).margin(4.0 * std::sqrt(2.0 / count)));
  CHECK(within / double(count) ==
        Approx(0.9544997361).margin(4.0 * std::sqrt(0.9545 * 0.0455 / count)));
}
