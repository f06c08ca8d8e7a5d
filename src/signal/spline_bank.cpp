#include "spline_bank.hpp"

#include <algorithm>
#include <cmath>
#include <complex>
#include <numbers>

namespace clickwise::signal {

namespace {

using std::numbers::pi;
using Complex = std::complex<double>;

constexpr double fastest_hz = 300.0;   // no shaft motion of a bike lies above it
constexpr double fastest_share = 0.5;  // of the rate
constexpr double slowest_hz = 4.0;
constexpr double slowest_share = 1.0 / 20.0;  // of the fastest, at low rates
constexpr double settled = 1e-8;              // share of a transient left

// The root inside the unit circle of z + 1/z = 2 - s.
Complex root_inside(Complex s) {
  const Complex half = 1.0 - s / 2.0;
  const Complex z = half + std::sqrt(half * half - 1.0);
  return std::abs(z) < 1.0 ? z : 1.0 / z;
}

// What the first difference makes of a frequency far below the rate. Near half the rate it makes
// less of it: there a member lets more through than its cut-off says.
double slow_difference_gain(double cutoff_hz, double rate_hz) {
  return 2.0 * pi * cutoff_hz / rate_hz;
}

}  // namespace

// The denominator 1 + lambda (2 - z - 1/z)^3 has its roots where s = 2 - z - 1/z is a cube root of
// -1/lambda = -c^3: one real, one conjugate pair.
SplineBank::SplineBank(double rate_hz) : rate_hz_(rate_hz) {
  const double top = std::min(fastest_hz, fastest_share * rate_hz);
  const double bottom = std::min(slowest_hz, slowest_share * top);
  const double step = std::pow(bottom / top, 1.0 / static_cast<double>(bank_size - 1));
  double slowest_pole = 0.0;
  for (Eigen::Index k = 0; k < bank_size; ++k) {
    cutoff_hz_[k] = top * std::pow(step, static_cast<double>(k));
    const double c = std::pow(slow_difference_gain(cutoff_hz_[k], rate_hz), 2.0);
    const double real = root_inside(-c).real();
    const Complex pair = root_inside(c * std::polar(1.0, pi / 3.0));
    real_gain_[k] = 1.0 - real;
    pair_gain_[k] = std::norm(1.0 - pair);
    pair_keep_[k] = std::norm(pair);
    slowest_pole = std::max({slowest_pole, real, std::abs(pair)});
  }
  settling_ = static_cast<std::size_t>(std::ceil(std::log(settled) / std::log(slowest_pole)));
}

double SplineBank::gain(Eigen::Index k, double w) const {
  const double s = 2.0 * std::sin(0.5 * w) / slow_difference_gain(cutoff_hz_[k], rate_hz_);
  const double square = s * s;
  return 1.0 / (1.0 + square * square * square);
}

}  // namespace clickwise::signal
