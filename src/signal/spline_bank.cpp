#include "spline_bank.hpp"

#include <algorithm>
#include <cmath>
#include <complex>
#include <numbers>

namespace clickwise::signal {

namespace {

using std::numbers::pi;
using Complex = std::complex<double>;

constexpr double fastest_hz = 300.0;    // no shaft motion of a bike lies above it
constexpr double fastest_share = 0.45;  // of the rate
constexpr double slowest_hz = 4.0;
constexpr double slowest_share = 1.0 / 20.0;  // of the fastest, at low rates
constexpr double settled = 1e-8;              // share of a transient left

// The root inside the unit circle of z + 1/z = 2 - s.
Complex root_inside(Complex s) {
  const Complex half = 1.0 - s / 2.0;
  const Complex z = half + std::sqrt(half * half - 1.0);
  return std::abs(z) < 1.0 ? z : 1.0 / z;
}

// 2 sin(pi f / rate), the size of the first difference at f.
double difference_gain(double cutoff_hz, double rate_hz) {
  return 2.0 * std::sin(pi * cutoff_hz / rate_hz);
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
    const double c = std::pow(difference_gain(cutoff_hz_[k], rate_hz), 2.0);
    const double real = root_inside(-c).real();
    const Complex pair = root_inside(c * std::polar(1.0, pi / 3.0));
    pole_[k] = real;
    real_gain_[k] = 1.0 - real;
    first_[k] = 2.0 * pair.real();
    second_[k] = -std::norm(pair);
    pair_gain_[k] = 1.0 - first_[k] - second_[k];
    slowest_pole = std::max({slowest_pole, real, std::abs(pair)});
  }
  settling_ = static_cast<std::size_t>(std::ceil(std::log(settled) / std::log(slowest_pole)));
}

double SplineBank::gain(Eigen::Index k, double w) const {
  const double s = 2.0 * std::sin(0.5 * w) / difference_gain(cutoff_hz_[k], rate_hz_);
  return 1.0 / (1.0 + std::pow(s * s, 3));
}

}  // namespace clickwise::signal
