#include "clickwise/sim/ground.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace clickwise::sim {

namespace {

constexpr double reach_beyond_m = 0.3;  // half the chord of the wheel that can touch

std::size_t half_window(double length_m, double spacing_m) {
  return static_cast<std::size_t>(std::max(0.0, std::round(length_m / spacing_m)));
}

double held(const std::vector<double>& values, std::ptrdiff_t i) {
  const auto last = static_cast<std::ptrdiff_t>(values.size()) - 1;
  return values[static_cast<std::size_t>(std::clamp<std::ptrdiff_t>(i, 0, last))];
}

// max over u of ground(d + u) + sqrt(R^2 - u^2) - R
std::vector<double> circle_envelope(const std::vector<double>& ground, double radius_m,
                                    double spacing_m) {
  const auto reach = static_cast<std::ptrdiff_t>(
      half_window(std::min(reach_beyond_m, 0.95 * radius_m), spacing_m));
  std::vector<double> sink;
  for (std::ptrdiff_t k = -reach; k <= reach; ++k) {
    const double u = spacing_m * static_cast<double>(k);
    sink.push_back(std::sqrt(radius_m * radius_m - u * u) - radius_m);
  }
  std::vector<double> axle(ground.size());
  for (std::size_t i = 0; i < ground.size(); ++i) {
    double top = ground[i];
    for (std::ptrdiff_t k = -reach; k <= reach; ++k) {
      const double touch = held(ground, static_cast<std::ptrdiff_t>(i) + k);
      top = std::max(top, touch + sink[static_cast<std::size_t>(k + reach)]);
    }
    axle[i] = top;
  }
  return axle;
}

std::vector<double> patch_mean(const std::vector<double>& heights, double patch_m,
                               double spacing_m) {
  const auto reach = static_cast<std::ptrdiff_t>(half_window(0.5 * patch_m, spacing_m));
  std::vector<double> weight;
  double sum = 0.0;
  for (std::ptrdiff_t k = -reach; k <= reach; ++k) {
    const double u = static_cast<double>(k) / (static_cast<double>(reach) + 1.0);
    weight.push_back(1.0 + std::cos(std::numbers::pi * u));
    sum += weight.back();
  }
  std::vector<double> mean(heights.size());
  for (std::size_t i = 0; i < heights.size(); ++i) {
    double total = 0.0;
    for (std::ptrdiff_t k = -reach; k <= reach; ++k)
      total += weight[static_cast<std::size_t>(k + reach)] *
               held(heights, static_cast<std::ptrdiff_t>(i) + k);
    mean[i] = total / sum;
  }
  return mean;
}

}  // namespace

WheelPath::WheelPath(double from_m, double spacing_m, std::vector<double> heights)
    : from_m_(from_m), spacing_m_(spacing_m), heights_(std::move(heights)) {}

Ground WheelPath::at(double distance_m, double speed_m_s) const {
  const double u = (distance_m - from_m_) / spacing_m_;
  if (!(u > 0.0)) return {heights_.front(), 0.0};
  const auto i = static_cast<std::size_t>(u);
  if (i + 1 >= heights_.size()) return {heights_.back(), 0.0};
  const double rise = heights_[i + 1] - heights_[i];
  return {heights_[i] + (u - static_cast<double>(i)) * rise, rise / spacing_m_ * speed_m_s};
}

double WheelPath::height_m(double distance_m) const {
  return at(distance_m, 0.0).height_m;
}

WheelPath rolled(const WheelPath& ground, const Rolling& rolling) {
  const double spacing = ground.spacing_m();
  auto axle = circle_envelope(ground.heights(), rolling.wheel_radius_m, spacing);
  return {ground.from_m(), spacing, patch_mean(axle, rolling.patch_m, spacing)};
}

}  // namespace clickwise::sim
