#include "clickwise/signal/spectrum.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <complex>
#include <numbers>
#include <numeric>
#include <random>
#include <vector>

namespace signal = clickwise::signal;
using signal::Window;
using std::numbers::pi;

namespace {

double bandwidth(Window window) {
  return signal::noise_bandwidth_bins(signal::weights(window, 4096));
}

double mean(const std::vector<double>& values) {
  return std::accumulate(values.begin(), values.end(), 0.0) / static_cast<double>(values.size());
}

// Loss of a tone half a bin off, dB.
double scallop_loss_db(Window window) {
  const std::vector<double> w = signal::weights(window, 4096);
  std::complex<double> sum = 0.0;
  for (std::size_t i = 0; i < w.size(); ++i) {
    sum += w[i] * std::polar(1.0, pi * static_cast<double>(i) / 4096.0);
  }
  return -20.0 * std::log10(std::abs(sum) / (4096.0 * mean(w)));
}

// Correlation of the noise of two segments that overlap by a share (Welch 1967).
double overlap_correlation(Window window, double share) {
  const std::vector<double> w = signal::weights(window, 4096);
  const auto shift = static_cast<std::size_t>((1.0 - share) * 4096.0);
  double both = 0.0, one = 0.0;
  for (std::size_t i = 0; i < w.size(); ++i) one += w[i] * w[i];
  for (std::size_t i = 0; i + shift < w.size(); ++i) both += w[i] * w[i + shift];
  return both / one;
}

std::vector<double> tone(double amplitude, double frequency_hz, double rate_hz, std::size_t n) {
  std::vector<double> y(n);
  for (std::size_t i = 0; i < n; ++i) {
    y[i] = amplitude * std::sin(2.0 * pi * frequency_hz * static_cast<double>(i) / rate_hz);
  }
  return y;
}

std::vector<double> white(double sigma, std::size_t n, unsigned seed) {
  std::mt19937_64 random(seed);
  std::normal_distribution<double> normal(0.0, sigma);
  std::vector<double> y(n);
  for (double& value : y) value = normal(random);
  return y;
}

}  // namespace

// Harris, Proc. IEEE 66:51-83 (1978), table I (from memory), recomputed (check-values 2.4a, b).
TEST_CASE("windows have their published noise bandwidths", "[signal]") {
  CHECK(bandwidth(Window::rectangle) == Approx(1.0).margin(1e-4));
  CHECK(bandwidth(Window::hann) == Approx(1.5).margin(1e-4));
  CHECK(bandwidth(Window::hamming) == Approx(1.362826).margin(1e-4));
  CHECK(bandwidth(Window::blackman) == Approx(1.726757).margin(1e-4));
  CHECK(bandwidth(Window::blackman_harris) == Approx(2.004353).margin(1e-4));
  CHECK(bandwidth(Window::flat_top) == Approx(3.770246).margin(1e-5));
}

TEST_CASE("the noise bandwidth of any weights is theirs: Tukey's and Kaiser's", "[signal]") {
  const std::size_t n = 4096;
  SECTION("Tukey, half of it tapered (check-values 2.4a)") {
    std::vector<double> tukey(n, 1.0);
    for (std::size_t i = 0; i < n / 4; ++i) {
      const double turn = pi * static_cast<double>(i) / static_cast<double>(n / 4);
      tukey[i] = 0.5 - 0.5 * std::cos(turn);
      if (i > 0) tukey[n - i] = tukey[i];
    }
    CHECK(signal::noise_bandwidth_bins(tukey) == Approx(1.222222).margin(1e-4));
  }
  SECTION("Kaiser (check-values 2.4b)") {
    const std::vector<double> alpha{2.0, 2.5, 3.0, 3.5};
    const std::vector<double> bins{1.496342, 1.651920, 1.795235, 1.928448};
    for (std::size_t a = 0; a < alpha.size(); ++a) {
      std::vector<double> kaiser(n);
      for (std::size_t i = 0; i < n; ++i) {
        const double x = 2.0 * static_cast<double>(i) / static_cast<double>(n) - 1.0;
        kaiser[i] = std::cyl_bessel_i(0.0, pi * alpha[a] * std::sqrt(1.0 - x * x));
      }
      CHECK(signal::noise_bandwidth_bins(kaiser) == Approx(bins[a]).margin(1e-5));
    }
  }
}

TEST_CASE("coherent gain, mean square, scallop loss and overlap correlation", "[signal]") {
  // check-values 2.4c, 2.4f
  CHECK(mean(signal::weights(Window::hann, 4096)) == Approx(0.5).margin(1e-12));
  CHECK(mean(signal::weights(Window::hamming, 4096)) == Approx(0.54).margin(1e-12));
  CHECK(mean(signal::weights(Window::blackman, 4096)) == Approx(0.42).margin(1e-12));
  std::vector<double> squares = signal::weights(Window::hann, 4096);
  for (double& w : squares) w *= w;
  CHECK(mean(squares) == Approx(0.375).margin(1e-12));
  CHECK(scallop_loss_db(Window::rectangle) == Approx(3.9224).margin(1e-3));
  CHECK(scallop_loss_db(Window::hann) == Approx(1.4236).margin(1e-3));
  CHECK(scallop_loss_db(Window::blackman) == Approx(1.0989).margin(1e-3));
  CHECK(overlap_correlation(Window::hann, 0.50) == Approx(1.0 / 6.0).margin(1e-5));
  CHECK(overlap_correlation(Window::hann, 0.75) == Approx(0.659155).margin(1e-5));
}

// Parseval: the density of A sin at a bin's centre sums to A^2/2 (check-values 2.4d).
TEST_CASE("a tone's power is the sum of its density", "[signal]") {
  const std::vector<double> y = tone(3.0, 125.0, 1000.0, 4096);
  const auto density = [&](Window window) {
    return signal::welch({y}, 1000.0, {.window = window, .remove_mean = false});
  };
  const signal::Spectrum rectangle = density(Window::rectangle);
  const signal::Spectrum hann = density(Window::hann);
  const auto sum = [](const signal::Spectrum& s) {
    return s.bin_hz * std::accumulate(s.density.begin(), s.density.end(), 0.0);
  };
  CHECK(rectangle.averages == 7);
  CHECK(rectangle.density.size() == 513);
  CHECK(sum(rectangle) == Approx(4.5).epsilon(1e-9));
  CHECK(sum(hann) == Approx(4.5).epsilon(1e-9));
  CHECK(rectangle.density[128] == Approx(4.608).epsilon(1e-9));
  CHECK(hann.density[128] == Approx(3.072).epsilon(1e-9));
  CHECK(hann.density[128] * hann.bin_hz * bandwidth(Window::hann) == Approx(4.5).epsilon(1e-9));
}

// One-sided: 2 s^2 / rate, without the factor 2 at 0 and at half the rate (check-values 2.4e).
TEST_CASE("white noise has a flat one-sided density", "[signal]") {
  const std::vector<double> y = white(1.0, 1 << 18, 5);
  for (const bool median : {false, true}) {
    const signal::Spectrum s = signal::welch(
        {y}, 1000.0, {.segment = 256, .overlap = 0, .remove_mean = false, .median = median});
    // A median's variance is pi/2 of a mean's for normal values; for exponential ones 1/ln(2)^2.
    const double spread =
        (median ? 1.0 / std::log(2.0) : 1.0) / std::sqrt(static_cast<double>(s.averages));
    CHECK(s.density[64] == Approx(0.002).epsilon(4.0 * spread));
    CHECK(s.density[0] == Approx(0.001).epsilon(4.0 * 2.0 * spread));
    if (!median) CHECK(s.density[128] == Approx(0.001).epsilon(4.0 * 1.5 * spread));
    double sum = 0.0;
    for (const double value : s.density) sum += value * s.bin_hz;
    CHECK(sum == Approx(1.0).epsilon(4.0 * spread / std::sqrt(128.0 / 1.5)));
  }
}

TEST_CASE("no segment spans two stretches, and too short ones give none", "[signal]") {
  const std::vector<double> low(300, -1.0), high(300, 1.0);
  const signal::WelchOptions options{.segment = 256, .overlap = 128};
  const signal::Spectrum s = signal::welch({low, high}, 100.0, options);
  CHECK(s.averages == 2);
  for (const double value : s.density) CHECK(value == Approx(0.0).margin(1e-30));
  const std::vector<double> brief(255, 1.0);
  CHECK(signal::welch({brief}, 100.0, options).averages == 0);
  CHECK(signal::welch({}, 100.0, options).density.empty());
}

TEST_CASE("options that make no spectrum are refused", "[signal]") {
  const std::vector<double> y(64, 0.0);
  CHECK_THROWS_AS(signal::welch({y}, 1.0, {.segment = 1, .overlap = 0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::welch({y}, 1.0, {.segment = 8, .overlap = 8}), std::invalid_argument);
  CHECK_THROWS_AS(signal::welch({y}, 0.0, {}), std::invalid_argument);
}
