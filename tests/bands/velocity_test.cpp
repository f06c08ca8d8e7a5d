#include "clickwise/bands/velocity.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <chrono>
#include <cmath>
#include <limits>
#include <map>
#include <numbers>
#include <numeric>
#include <random>
#include <stdexcept>
#include <vector>

#include "clickwise/core/statistics.hpp"

namespace bands = clickwise::bands;

namespace {

using Mask = std::vector<std::uint8_t>;

constexpr bands::Splits splits_700{0.7, 0.7};

Mask all(std::size_t n) {
  return Mask(n, 1);
}

double sum(const std::vector<double>& values) {
  return std::accumulate(values.begin(), values.end(), 0.0);
}

double sum_between(const bands::VelocityHistogram& h, const std::vector<double>& values,
                   double from, double to) {
  double total = 0.0;
  for (std::size_t i = 0; i < values.size(); ++i)
    if (h.edges_m_s[i] >= from && h.edges_m_s[i + 1] <= to) total += values[i];
  return total;
}

bool has_edge(const bands::VelocityHistogram& h, double edge) {
  return std::ranges::find(h.edges_m_s, edge) != h.edges_m_s.end();
}

double counted_s(const bands::VelocityBands& b) {
  return b.compression.low_s + b.compression.high_s + b.rebound.low_s + b.rebound.high_s;
}

// Check-values 1.1: x = A sin(wt), A = 0.05 m, 2 Hz; ten whole periods.
constexpr double amplitude_m = 0.05;
constexpr double peak_m_s = 0.628318530718;
constexpr std::size_t samples = 200000;
constexpr double duration_s = 5.0;
constexpr double interval_s = duration_s / samples;
constexpr double share_tolerance = 4.0 * 10 / samples;  // 4 / N of one period: the bin edge effect

std::vector<double> sinusoid() {
  std::vector<double> v(samples);
  for (std::size_t i = 0; i < samples; ++i)
    v[i] =
        peak_m_s * std::cos(4.0 * std::numbers::pi * (static_cast<double>(i) + 0.25) * interval_s);
  return v;
}

std::vector<double> gaussian(std::size_t n, double rms, unsigned seed) {
  std::mt19937 generator(seed);
  std::normal_distribution<double> normal(0.0, rms);
  std::vector<double> v(n);
  for (double& value : v) value = normal(generator);
  return v;
}

double work_per_cycle(const bands::ForceCurve& force_n) {
  const auto b = bands::velocity_bands(sinusoid(), all(samples), interval_s, splits_700, force_n);
  return sum(b.histogram.joules) / (2.0 * duration_s);
}

bands::ForceCurve power_law(double c, double p) {
  return [=](double v) { return std::copysign(c * std::pow(std::abs(v), p), v); };
}

}  // namespace

TEST_CASE("ten samples fall into the bands that a hand count gives", "[bands]") {
  const std::vector<double> v{0.0, 0.3, 0.7, 0.700001, 2.0, -0.1, -0.4, -0.400001, -0.0, -3.0};
  const Mask counted{1, 1, 1, 1, 1, 1, 1, 1, 1, 0};
  const auto b =
      bands::velocity_bands(v, counted, 0.01, {0.7, 0.4}, [](double x) { return 100 * x; });
  // Low compression: 0, 0.3, 0.7 (at the split) and -0.0 (an exact zero); high: the two above.
  CHECK(b.compression.low_s == Approx(0.04).epsilon(1e-12));
  CHECK(b.compression.high_s == Approx(0.02).epsilon(1e-12));
  CHECK(b.rebound.low_s == Approx(0.02).epsilon(1e-12));
  CHECK(b.rebound.high_s == Approx(0.01).epsilon(1e-12));
  CHECK(b.compression.low_m == Approx(0.010).epsilon(1e-12));
  CHECK(b.rebound.high_m == Approx(0.00400001).epsilon(1e-12));
  CHECK(*b.compression.low_j == Approx(0.01 * 100 * (0.09 + 0.49)).epsilon(1e-9));
  CHECK(*b.rebound.low_j == Approx(0.01 * 100 * (0.01 + 0.16)).epsilon(1e-9));
  CHECK(b.compression.max_m_s == 2.0);
  CHECK(b.rebound.max_m_s == 0.400001);
  CHECK(b.compression.p50_m_s == Approx((0.3 + 0.7) / 2).epsilon(1e-12));
  CHECK(b.rebound.p50_m_s == 0.4);
}

TEST_CASE("the splits and zero are edges, on the grid or not, and bin sums are band sums",
          "[bands]") {
  const auto split = GENERATE(0.7, 0.57, 0.3333, 1.0005, 12.5, 1e-6);
  CAPTURE(split);
  const auto v = gaussian(20000, 0.8, 11);
  const auto b = bands::velocity_bands(v, all(v.size()), 1e-3, {split, 0.4567}, power_law(900, 1));
  const auto& h = b.histogram;
  CHECK(has_edge(h, 0.0));
  CHECK(has_edge(h, split));
  CHECK(has_edge(h, -0.4567));
  CHECK(std::ranges::adjacent_find(h.edges_m_s, std::greater_equal{}) == h.edges_m_s.end());
  CHECK(sum_between(h, h.seconds, 0.0, split) == Approx(b.compression.low_s).epsilon(1e-12));
  CHECK(sum_between(h, h.seconds, -100, -0.4567) == Approx(b.rebound.high_s).epsilon(1e-12));
  CHECK(sum_between(h, h.joules, -0.4567, 0.0) == Approx(*b.rebound.low_j).epsilon(1e-12));
  CHECK(sum_between(h, h.metres, split, 100) == Approx(b.compression.high_m).margin(1e-12));
  CHECK(counted_s(b) == Approx(20.0).margin(1e-6));
  CHECK(sum(h.seconds) == Approx(20.0).margin(1e-6));
}

TEST_CASE("each bin holds the edge farther from zero, at every edge of the grid", "[bands]") {
  std::vector<double> v;
  for (int i = -150; i <= 150; ++i) v.push_back(i * 0.01);
  const auto b = bands::velocity_bands(v, all(v.size()), 1.0, {0.7, 0.7});
  const auto& h = b.histogram;
  for (std::size_t i = 0; i < h.seconds.size(); ++i) {
    const double lower = h.edges_m_s[i], upper = h.edges_m_s[i + 1];
    const auto inside = std::ranges::count_if(v, [&](double x) {
      if (upper <= 0) return x >= lower && x < upper;
      return x <= upper && (lower == 0 ? x >= 0 : x > lower);
    });
    CAPTURE(lower, upper);
    CHECK(h.seconds[i] == static_cast<double>(inside));
  }
}

TEST_CASE("absurd and missing velocities neither explode the histogram nor lose time", "[bands]") {
  std::vector<double> v{0.1, -0.2, 1e6, -1e300, 55.0};
  auto b = bands::velocity_bands(v, all(5), 0.5, splits_700, power_law(1, 1));
  CHECK(counted_s(b) == 2.5);
  CHECK(b.histogram.seconds.size() < 2000);
  CHECK(b.histogram.edges_m_s.front() <= -1e300);
  CHECK(b.histogram.edges_m_s.back() >= 1e6);
  v = {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity(), 0.2};
  b = bands::velocity_bands(v, all(3), 0.5, splits_700);
  CHECK(counted_s(b) == 0.5);
  b = bands::velocity_bands(v, Mask(3, 0), 0.5, splits_700);
  CHECK(counted_s(b) == 0.0);
  CHECK(std::isnan(b.compression.p95_m_s));
  CHECK(std::isnan(b.rebound.max_m_s));
  CHECK_FALSE(b.compression.low_j.has_value());
  CHECK(b.histogram.joules.empty());
}

TEST_CASE("a split that parts nothing and sizes that differ are refused", "[bands]") {
  const std::vector<double> v{0.1};
  for (const double split : {0.0, -1.0, HUGE_VAL, std::nan("")})
    CHECK_THROWS_AS(bands::velocity_bands(v, all(1), 1.0, {split, 0.7}), std::invalid_argument);
  CHECK_THROWS_AS(bands::velocity_bands(v, all(2), 1.0, splits_700), std::invalid_argument);
  bands::VelocityOptions fine;
  fine.bin_m_s = 1e-9;
  CHECK_THROWS_AS(bands::velocity_bands(v, all(1), 1.0, splits_700, {}, fine),
                  std::invalid_argument);
}

// Check-values 1.1a, 1.1d, 1.1e: shares of a sinusoid below r of its peak, closed form.
TEST_CASE("a sinusoid's shares of time, distance and work are the closed forms", "[bands]") {
  const auto v = sinusoid();
  const double pi = std::numbers::pi;
  for (const double r : {0.1, 0.25, 0.5, std::numbers::sqrt2 / 2, 0.75, 0.9}) {
    CAPTURE(r);
    const double split = r * peak_m_s;
    const auto b = bands::velocity_bands(v, all(samples), interval_s, {split, split},
                                         [](double x) { return 1500.0 * x; });
    const double low_s = b.compression.low_s + b.rebound.low_s;
    const double low_m = b.compression.low_m + b.rebound.low_m;
    const double low_j = *b.compression.low_j + *b.rebound.low_j;
    CHECK(low_s / duration_s == Approx(2 / pi * std::asin(r)).margin(share_tolerance));
    CHECK(low_m / sum(b.histogram.metres) ==
          Approx(1 - std::sqrt(1 - r * r)).margin(share_tolerance));
    CHECK(low_j / sum(b.histogram.joules) ==
          Approx(2 / pi * (std::asin(r) - r * std::sqrt(1 - r * r))).margin(share_tolerance));
  }
}

// Check-value 1.1b.
TEST_CASE("a sinusoid split at 0.1 m/s gives four zones, alike in both directions", "[bands]") {
  const auto b = bands::velocity_bands(sinusoid(), all(samples), interval_s, {0.1, 0.1});
  CHECK(b.compression.low_s / duration_s == Approx(0.1017538835 / 2).margin(share_tolerance));
  CHECK(b.rebound.low_s / duration_s == Approx(0.1017538835 / 2).margin(share_tolerance));
  CHECK(b.compression.high_s / duration_s == Approx(0.8982461165 / 2).margin(share_tolerance));
  CHECK(b.rebound.high_s / duration_s == Approx(0.8982461165 / 2).margin(share_tolerance));
}

// Check-value 1.1c: mean speed 2 V / pi.
TEST_CASE("a sinusoid's mean speed, by distance and by density, is 2 V / pi", "[bands]") {
  const auto b = bands::velocity_bands(sinusoid(), all(samples), interval_s, splits_700);
  const double mean = 2 * peak_m_s / std::numbers::pi;
  CHECK(sum(b.histogram.metres) / duration_s == Approx(mean).epsilon(1e-6));
  const auto& d = b.density.compression;
  CHECK(std::inner_product(d.at.begin(), d.at.end(), d.weight.begin(), 0.0) / sum(d.weight) ==
        Approx(mean).epsilon(1e-4));  // the sampling of the half waves: 1 in 10000 a half wave
  CHECK(std::ranges::adjacent_find(d.at, std::greater_equal{}) == d.at.end());
}

// Check-value 1.1f.
TEST_CASE("a triangle wave lies wholly below, at or above the split", "[bands]") {
  std::vector<double> v;
  for (int i = 0; i < 1000; ++i) v.push_back(i % 100 < 50 ? 0.5 : -0.5);
  const auto at = bands::velocity_bands(v, all(1000), 1e-3, {0.5, 0.5});
  CHECK(at.compression.high_s + at.rebound.high_s == 0.0);
  CHECK(at.compression.low_s == Approx(0.5).epsilon(1e-12));
  const auto above = bands::velocity_bands(v, all(1000), 1e-3, {0.4999999, 0.4999999});
  CHECK(above.compression.low_s + above.rebound.low_s == 0.0);
}

// Check-values 1.2a to 1.2d: energy per cycle of the same motion through force laws.
TEST_CASE("a sinusoid's work through each force law is the closed form", "[bands]") {
  CHECK(work_per_cycle(power_law(1500, 1)) == Approx(148.0440660).epsilon(1e-6));
  CHECK(work_per_cycle(power_law(40, 0)) == Approx(8.0).epsilon(1e-6));
  CHECK(work_per_cycle(power_law(800, 2)) == Approx(42.1103121).epsilon(1e-6));
  CHECK(work_per_cycle(power_law(1, 0.5)) == Approx(0.1385609637).epsilon(1e-6));
  CHECK(work_per_cycle(power_law(1, 1.5)) == Approx(0.0716075312).epsilon(1e-6));
  CHECK(work_per_cycle(power_law(1, 1.75)) == Approx(0.0613088949).epsilon(1e-6));
}

// Check-value 1.2f.
TEST_CASE("different curves each way add half of each one's work", "[bands]") {
  const double work =
      work_per_cycle([](double v) { return v > 0 ? 1500.0 * v : std::copysign(40.0, v); });
  CHECK(work == Approx((148.0440660 + 8.0) / 2).epsilon(1e-6));
}

// Check-values 1.3a to 1.3c: Gaussian velocity; tolerances four standard errors of n samples.
TEST_CASE("Gaussian velocity gives the shares, mean, quantiles and work of the normal law",
          "[bands]") {
  const std::size_t n = 400000;
  const double s = 0.6;
  const auto v = gaussian(n, s, 5);
  const auto root_n = std::sqrt(static_cast<double>(n));
  for (const double k : {0.5, 1.0, 2.0}) {
    CAPTURE(k);
    const auto b = bands::velocity_bands(v, all(n), 1e-3, {k * s, k * s}, power_law(1500, 1));
    const double p = std::erf(k / std::numbers::sqrt2);
    const double low = (b.compression.low_s + b.rebound.low_s) / (1e-3 * static_cast<double>(n));
    CHECK(low == Approx(p).margin(4 * std::sqrt(p * (1 - p)) / root_n));
    const double q = p - k * std::sqrt(2 / std::numbers::pi) * std::exp(-k * k / 2);
    const double low_j = (*b.compression.low_j + *b.rebound.low_j) / sum(b.histogram.joules);
    CHECK(low_j == Approx(q).margin(4 * std::numbers::sqrt2 / root_n));  // sd of v^2 / mean: sqrt 2
  }
  const auto b = bands::velocity_bands(v, all(n), 1e-3, splits_700);
  CHECK(sum(b.histogram.metres) / (1e-3 * static_cast<double>(n)) / s ==
        Approx(0.7978845608).margin(4 * 0.6028 / root_n));
  // Standard error of a quantile: sqrt(p (1 - p) / n) / density, n / 2 samples each way.
  CHECK(b.compression.p50_m_s / s ==
        Approx(0.6744897502).margin(4 * 0.5 * 1.4142 / 0.6356 / root_n));
  CHECK(b.rebound.p95_m_s / s ==
        Approx(1.9599639845).margin(4 * 0.2179 * 1.4142 / 0.1169 / root_n));
}

TEST_CASE("two halves of a ride merge to the whole", "[bands]") {
  const auto v = gaussian(5001, 0.9, 3);
  const auto force = power_law(700, 0.8);
  Mask first(v.size(), 0), second(v.size(), 0);
  for (std::size_t i = 0; i < v.size(); ++i) (i < 1700 ? first : second)[i] = 1;
  const auto whole = bands::velocity_bands(v, all(v.size()), 0.002, splits_700, force);
  std::map<double, double> seconds, joules;
  for (const Mask& half : {first, second}) {
    const auto h = bands::velocity_bands(v, half, 0.002, splits_700, force).histogram;
    for (std::size_t i = 0; i < h.seconds.size(); ++i) {
      seconds[h.edges_m_s[i]] += h.seconds[i];
      joules[h.edges_m_s[i]] += h.joules[i];
    }
  }
  for (std::size_t i = 0; i < whole.histogram.seconds.size(); ++i) {
    CHECK(whole.histogram.seconds[i] ==
          Approx(seconds[whole.histogram.edges_m_s[i]]).margin(1e-12));
    CHECK(whole.histogram.joules[i] == Approx(joules[whole.histogram.edges_m_s[i]]).margin(1e-9));
  }
}

TEST_CASE("mirroring the velocity swaps compression and rebound", "[bands]") {
  auto v = gaussian(3000, 0.9, 8);
  const auto a = bands::velocity_bands(v, all(v.size()), 1e-3, {0.6, 0.9}, power_law(500, 1.2));
  for (double& value : v) value = -value;
  const auto b = bands::velocity_bands(v, all(v.size()), 1e-3, {0.9, 0.6}, power_law(500, 1.2));
  CHECK(a.compression.low_s == b.rebound.low_s);
  CHECK(a.rebound.high_m == b.compression.high_m);
  CHECK(*a.compression.high_j == *b.rebound.high_j);
  CHECK(a.compression.p95_m_s == b.rebound.p95_m_s);
  CHECK(a.density.rebound.weight == b.density.compression.weight);
}

TEST_CASE("doubling the rate leaves times, work and quantiles", "[bands]") {
  const auto v = gaussian(4000, 0.7, 21);
  std::vector<double> twice;
  for (const double value : v) twice.insert(twice.end(), {value, value});
  const auto a = bands::velocity_bands(v, all(v.size()), 0.002, splits_700, power_law(500, 1));
  const auto b =
      bands::velocity_bands(twice, all(twice.size()), 0.001, splits_700, power_law(500, 1));
  CHECK(b.compression.low_s == Approx(a.compression.low_s).epsilon(1e-9));
  CHECK(*b.rebound.high_j == Approx(*a.rebound.high_j).epsilon(1e-9));
  CHECK(b.compression.p50_m_s == Approx(a.compression.p50_m_s).margin(5e-3));
}

TEST_CASE("the quantiles are those of the speeds themselves", "[bands]") {
  const auto n = GENERATE(1u, 2u, 3u, 20u, 21u, 997u);
  CAPTURE(n);
  auto v = gaussian(n, 1.5, 100 + n);
  for (double& value : v) value = std::abs(value);
  const auto b = bands::velocity_bands(v, all(n), 0.003, {0.7, 0.7});
  CHECK(b.compression.p50_m_s == Approx(clickwise::core::quantile(v, 0.50)).epsilon(1e-12));
  CHECK(b.compression.p95_m_s == Approx(clickwise::core::quantile(v, 0.95)).epsilon(1e-12));
}

TEST_CASE("the densities of a window hold its seconds", "[bands]") {
  const auto v = gaussian(3000, 0.9, 8);
  Mask window(v.size(), 0);
  std::fill(window.begin() + 100, window.begin() + 400, std::uint8_t{1});
  const auto d = bands::speed_densities(v, window, 1e-3);
  CHECK(sum(d.compression.weight) + sum(d.rebound.weight) == Approx(0.3).epsilon(1e-9));
}

TEST_CASE("speed of the bands of a ten-minute log", "[.][benchmark]") {
  const auto v = gaussian(600000, 0.7, 21);
  const auto counted = all(v.size());
  const auto start = std::chrono::steady_clock::now();
  const auto b = bands::velocity_bands(v, counted, 1e-3, splits_700, power_law(500, 1.3));
  const std::chrono::duration<double, std::milli> took = std::chrono::steady_clock::now() - start;
  WARN("600,000 samples: " << took.count() << " ms");
  CHECK(counted_s(b) == Approx(600.0).margin(1e-6));
}
