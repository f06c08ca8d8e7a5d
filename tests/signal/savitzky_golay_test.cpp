#include "clickwise/signal/savitzky_golay.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <numbers>
#include <vector>

namespace signal = clickwise::signal;
using signal::SavitzkyGolay;
using std::numbers::pi;

namespace {

struct Row {
  SavitzkyGolay filter;
  std::vector<double> integers;
  double divisor;
  double noise;
};

void require_close(const std::vector<double>& result, const std::vector<double>& expected,
                   double tolerance) {
  REQUIRE(result.size() == expected.size());
  for (std::size_t i = 0; i < result.size(); ++i) {
    CHECK(result[i] == Approx(expected[i]).margin(tolerance).epsilon(0.0));
  }
}

double gain_relative_to_truth(const SavitzkyGolay& filter, double share_of_rate) {
  const double frequency_hz = share_of_rate / filter.interval_s;
  return signal::frequency_response(filter, frequency_hz).imag() / (2.0 * pi * frequency_hz);
}

}  // namespace

// Savitzky and Golay, Anal. Chem. 36:1627-1639 (1964), as corrected by Steinier, Termonia and
// Deltour, Anal. Chem. 44:1906-1909 (1972), and exact rational least squares (check-values 2.1).
TEST_CASE("the published coefficients and their noise gains are met", "[signal]") {
  const std::vector<Row> rows{
      {{5, 2, 0, 1.0}, {-3, 12, 17, 12, -3}, 35, 0.6969320524},
      {{5, 3, 0, 1.0}, {-3, 12, 17, 12, -3}, 35, 0.6969320524},
      {{7, 2, 0, 1.0}, {-2, 3, 6, 7, 6, 3, -2}, 21, 0.5773502692},
      {{9, 2, 0, 1.0}, {-21, 14, 39, 54, 59, 54, 39, 14, -21}, 231, 0.5053822864},
      {{7, 4, 0, 1.0}, {5, -30, 75, 131, 75, -30, 5}, 231, 0.7530601351},
      {{9, 5, 0, 1.0}, {15, -55, 30, 135, 179, 135, 30, -55, 15}, 429, 0.6459484633},
      {{5, 2, 1, 1.0}, {-2, -1, 0, 1, 2}, 10, 0.3162277660},
      {{7, 2, 1, 1.0}, {-3, -2, -1, 0, 1, 2, 3}, 28, 0.1889822365},
      {{9, 2, 1, 1.0}, {-4, -3, -2, -1, 0, 1, 2, 3, 4}, 60, 0.1290994449},
      {{5, 3, 1, 1.0}, {1, -8, 0, 8, -1}, 12, 0.9501461876},
      {{7, 4, 1, 1.0}, {22, -67, -58, 0, 58, 67, -22}, 252, 0.5124120779},
      {{9, 3, 1, 1.0}, {86, -142, -193, -126, 0, 126, 193, 142, -86}, 1188, 0.3381387624},
      {{5, 2, 2, 1.0}, {2, -1, -2, -1, 2}, 7, 0.5345224838},
      {{7, 3, 2, 1.0}, {5, 0, -3, -4, -3, 0, 5}, 42, 0.2182178902},
      {{9, 2, 2, 1.0}, {28, 7, -8, -17, -20, -17, -8, 7, 28}, 462, 0.1139605765}};
  for (const Row& row : rows) {
    CAPTURE(row.filter.span, row.filter.degree, row.filter.derivative);
    std::vector<double> expected = row.integers;
    for (double& c : expected) c /= row.divisor;
    const std::vector<double> c = signal::coefficients(row.filter);
    require_close(c, expected, 1e-14);
    CHECK(signal::noise_gain(c) == Approx(row.noise).margin(1e-10).epsilon(0.0));
  }
}

TEST_CASE("a cubic's slope is biased by a quadratic fit and exact by a cubic one", "[signal]") {
  const double h = 0.01;  // check-values 2.1a
  std::vector<double> y;
  for (int i = -3; i <= 3; ++i) {
    const double t = i * h;
    y.push_back(2.0 + 3.0 * t - 4.0 * t * t + 5.0 * t * t * t);
  }
  CHECK(signal::filtered({7, 2, 1, h}, y)[3] == Approx(3.0035).margin(1e-11).epsilon(0.0));
  CHECK(signal::filtered({7, 3, 1, h}, y)[3] == Approx(3.0).margin(1e-11).epsilon(0.0));
}

// The documentation example of SciPy's savgol_filter, mode 'interp' (check-values 2.1b).
TEST_CASE("the ends take the polynomial of the first or last full span", "[signal]") {
  const std::vector<double> y{2, 2, 5, 2, 1, 0, 1, 4, 9};
  require_close(signal::filtered({5, 2, 0, 1.0}, y),
                {1.65714286, 3.17142857, 3.54285714, 2.85714286, 0.65714286, 0.17142857, 1, 4, 9},
                5e-9);
  require_close(signal::filtered({5, 2, 1, 1.0}, y),
                {2.08571429, 0.94285714, -0.2, -0.8, -1, 0.4, 2, 4, 6}, 5e-9);
}

TEST_CASE("the derivative's gain relative to the truth is the closed form", "[signal]") {
  SECTION("central difference, sin(w)/w, and fourth order (check-values 2.1c)") {
    const SavitzkyGolay central{3, 2, 1, 0.001};
    const SavitzkyGolay fourth{5, 4, 1, 0.001};
    const std::vector<double> at{0.01, 0.05, 0.1};
    const std::vector<double> expected_central{0.9993421562, 0.9836316431, 0.9354892838};
    const std::vector<double> expected_fourth{0.9999994807, 0.9996790962, 0.9950434688};
    for (std::size_t i = 0; i < at.size(); ++i) {
      CHECK(gain_relative_to_truth(central, at[i]) ==
            Approx(expected_central[i]).margin(1e-9).epsilon(0.0));
      CHECK(gain_relative_to_truth(fourth, at[i]) ==
            Approx(expected_fourth[i]).margin(1e-9).epsilon(0.0));
    }
  }
  SECTION("quadratic over 5, 7 and 9 samples (check-values 2.1d)") {
    const std::vector<double> expected{0.9451177556, 0.8893665714, 0.8186786553};
    for (std::size_t i = 0; i < 3; ++i) {
      const SavitzkyGolay filter{5 + 2 * static_cast<int>(i), 2, 1, 0.001};
      CHECK(gain_relative_to_truth(filter, 0.05) == Approx(expected[i]).margin(1e-9).epsilon(0.0));
    }
  }
}

// Uniform quantiser law: 12 bits over 200 mm at 1 kHz (check-values 2.1e).
TEST_CASE("quantisation noise passes the derivative as its noise gain says", "[signal]") {
  const double rms_mm = 200.0 / 4096.0 / std::sqrt(12.0);
  CHECK(rms_mm == Approx(0.0140954656).epsilon(1e-8));
  const auto noise_mm_s = [&](int span) {
    return rms_mm * signal::noise_gain(signal::coefficients({span, 2, 1, 0.001}));
  };
  CHECK(noise_mm_s(3) == Approx(9.96700).epsilon(1e-5));
  CHECK(noise_mm_s(7) == Approx(2.66379).epsilon(1e-5));
  CHECK(noise_mm_s(9) == Approx(1.81972).epsilon(1e-5));
}

TEST_CASE("a long span of high degree still reproduces its polynomials", "[signal]") {
  const SavitzkyGolay filter{201, 8, 1, 0.01};
  std::vector<double> y, slope;
  for (int i = 0; i < 201; ++i) {
    const double t = (i - 100) * 0.01;
    y.push_back(std::pow(t, 8) - 3.0 * std::pow(t, 5) + 1.0);
    slope.push_back(8.0 * std::pow(t, 7) - 15.0 * std::pow(t, 4));
  }
  // One unit in the last place of 7, through coefficients that sum to about 200 in size.
  require_close(signal::filtered(filter, y), slope, 1e-10);
}

TEST_CASE("impossible filters and inputs are refused", "[signal]") {
  const std::vector<double> four(4, 1.0);
  const std::vector<double> broken{1, 2, std::numeric_limits<double>::quiet_NaN(), 4, 5};
  CHECK_THROWS_AS(signal::coefficients({4, 2, 0, 1.0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::coefficients({3, 3, 0, 1.0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::coefficients({5, 2, 3, 1.0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::coefficients({5, 2, 1, 0.0}), std::invalid_argument);
  CHECK_THROWS_AS(signal::filtered({5, 2, 0, 1.0}, four), std::invalid_argument);
  CHECK_THROWS_AS(signal::filtered({5, 2, 0, 1.0}, broken), std::invalid_argument);
}
