#include "force_map.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <array>
#include <cmath>

#include "clickwise/core/statistics.hpp"

namespace clickwise::motion {

namespace {

constexpr std::array knots{-6.0, -4.0, -3.0,  -2.0,  -1.4, -1.0, -0.7, -0.5, -0.3,
                           -0.2, -0.1, -0.05, -0.02, 0.02, 0.05, 0.1,  0.2,  0.3,
                           0.5,  0.7,  1.0,   1.4,   2.0,  3.0,  4.5,  6.0};
constexpr auto knot_count = static_cast<Eigen::Index>(knots.size());
constexpr Eigen::Index powers = 3;
constexpr double least_spread_m_s2 = 0.5;
constexpr double bending = 1e-6;             // of the smoothness of D, a sample
constexpr std::size_t longest_memory = 300;  // samples

struct Between {
  Eigen::Index knot;
  double part;
};

Between between(double velocity) {
  const double v = std::clamp(velocity, knots.front(), knots.back());
  const auto above = std::upper_bound(knots.begin() + 1, knots.end() - 1, v);
  const auto k = static_cast<std::size_t>(above - knots.begin()) - 1;
  return {static_cast<Eigen::Index>(k), (v - knots[k]) / (knots[k + 1] - knots[k])};
}

double interpolated(const Eigen::VectorXd& values, const Between& at) {
  return (1.0 - at.part) * values[at.knot] + at.part * values[at.knot + 1];
}

std::array<double, powers> polynomial(double x) {
  return {x, x * x, x * x * x * x};
}

void add_smoothness(Eigen::MatrixXd& normal, double samples) {
  normal.diagonal().array() += 1e-2;
  for (Eigen::Index j = 1; j + 1 < knot_count; ++j) {
    const auto k = static_cast<std::size_t>(j);
    const double before = 1.0 / (knots[k] - knots[k - 1]);
    const double after = 1.0 / (knots[k + 1] - knots[k]);
    const Eigen::Vector3d bend(before, -before - after, after);
    normal.block<3, 3>(j - 1, j - 1) += bending * samples * bend * bend.transpose();
  }
}

}  // namespace

ForceMap::ForceMap(SpringCurve spring)
    : spring_(std::move(spring)), coefficients_(Eigen::VectorXd::Zero(knot_count + powers)) {}

double ForceMap::spring(double travel_m) const {
  if (spring_) return spring_(travel_m);
  const auto p = polynomial(travel_m);
  double sum = 0.0;
  for (std::size_t k = 0; k < p.size(); ++k)
    sum += coefficients_[knot_count + static_cast<Eigen::Index>(k)] * p[k];
  return sum;
}

double ForceMap::spring_slope(double travel_m) const {
  constexpr double step_m = 1e-3;
  return (spring(travel_m + step_m) - spring(travel_m - step_m)) / (2.0 * step_m);
}

double ForceMap::value(double travel_m, double velocity_m_s) const {
  return spring(travel_m) + interpolated(coefficients_, between(velocity_m_s));
}

void ForceMap::fit(std::span<const double> travel_m, std::span<const double> velocity_m_s,
                   std::span<const double> velocity_variance, std::span<const double> felt_m_s2,
                   std::span<const std::uint8_t> use) {
  const Eigen::Index size = knot_count + (spring_ ? 0 : powers);
  std::vector<double> residual(travel_m.size(), NAN);
  for (int pass = 0; pass < 3; ++pass) {
    Eigen::MatrixXd normal = Eigen::MatrixXd::Zero(size, size);
    Eigen::VectorXd right = Eigen::VectorXd::Zero(size);
    for (std::size_t i = 0; i < travel_m.size(); i += 2) {
      if (!use[i]) continue;
      const double y = felt_m_s2[i] - (spring_ ? spring_(travel_m[i]) : 0.0);
      double weight = 1.0 / (0.02 + 100.0 * velocity_variance[i]);
      if (pass > 0) weight /= 1.0 + std::pow(residual[i] / (1.5 * residual_), 2);
      const Between at = between(velocity_m_s[i]);
      std::array<std::pair<Eigen::Index, double>, 2 + powers> row{
          {{at.knot, 1.0 - at.part}, {at.knot + 1, at.part}, {0, 0.0}, {0, 0.0}, {0, 0.0}}};
      if (!spring_) {
        const auto p = polynomial(travel_m[i]);
        for (std::size_t k = 0; k < p.size(); ++k)
          row[2 + k] = {knot_count + static_cast<Eigen::Index>(k), p[k]};
      }
      const std::size_t entries = spring_ ? 2 : row.size();
      for (std::size_t a = 0; a < entries; ++a) {
        right[row[a].first] += weight * y * row[a].second;
        for (std::size_t b = 0; b < entries; ++b)
          normal(row[a].first, row[b].first) += weight * row[a].second * row[b].second;
      }
    }
    add_smoothness(normal, static_cast<double>(travel_m.size()));
    coefficients_.head(size) = normal.ldlt().solve(right);
    for (std::size_t i = 0; i < residual.size(); ++i)
      residual[i] = use[i] ? felt_m_s2[i] - value(travel_m[i], velocity_m_s[i]) : NAN;
    measure(residual, velocity_m_s);
  }
}

void ForceMap::measure(std::span<const double> residual, std::span<const double> velocity_m_s) {
  std::vector<double> known, sizes;
  for (const double one : residual)
    if (std::isfinite(one)) {
      known.push_back(one);
      sizes.push_back(std::abs(one));
    }
  if (known.empty()) return;
  double squares = 0.0;
  for (const double one : known) squares += one * one;
  const double rms = std::sqrt(squares / static_cast<double>(known.size()));
  residual_ = std::max(least_spread_m_s2, std::sqrt(1.4826 * core::median(std::move(sizes)) * rms));

  Eigen::VectorXd sum = Eigen::VectorXd::Constant(knot_count, 50.0 * residual_ * residual_);
  Eigen::VectorXd count = Eigen::VectorXd::Constant(knot_count, 50.0);
  for (std::size_t i = 0; i < residual.size(); ++i) {
    if (!std::isfinite(residual[i])) continue;
    const Between at = between(velocity_m_s[i]);
    sum[at.knot] += (1.0 - at.part) * residual[i] * residual[i];
    sum[at.knot + 1] += at.part * residual[i] * residual[i];
    count[at.knot] += 1.0 - at.part;
    count[at.knot + 1] += at.part;
  }
  spread_ = (sum.array() / count.array()).sqrt().max(least_spread_m_s2);

  double zero = 0.0;
  for (double& one : known) {
    one = std::clamp(one, -3.0 * residual_, 3.0 * residual_);
    zero += one * one;
  }
  memory_samples_ = 0.5;
  for (std::size_t lag = 1; lag < std::min(longest_memory, known.size()); ++lag) {
    double product = 0.0;
    for (std::size_t i = 0; i + lag < known.size(); i += 4)
      product += 4.0 * known[i] * known[i + lag];
    if (product < 0.05 * zero) break;
    memory_samples_ += product / zero;
  }
}

ForceMap::Linear ForceMap::at(double travel_m, double velocity_m_s) const {
  const double step = 0.02 + 0.02 * std::abs(velocity_m_s);
  Linear out;
  out.value = value(travel_m, velocity_m_s);
  out.by_travel = std::max(5.0, spring_slope(travel_m));
  out.by_velocity = std::max(0.3, (interpolated(coefficients_, between(velocity_m_s + step)) -
                                   interpolated(coefficients_, between(velocity_m_s - step))) /
                                      (2.0 * step));
  const double spread = interpolated(spread_, between(velocity_m_s));
  out.variance = spread * spread * 2.0 * memory_samples_;
  return out;
}

}  // namespace clickwise::motion
