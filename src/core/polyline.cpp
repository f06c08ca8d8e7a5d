#include "clickwise/core/polyline.hpp"

#include <algorithm>
#include <stdexcept>

namespace clickwise::core {

Polyline::Polyline(std::vector<double> x, std::vector<double> y)
    : x_(std::move(x)), y_(std::move(y)), integral_(x_.size(), 0.0) {
  if (x_.empty() || x_.size() != y_.size())
    throw std::invalid_argument("Polyline: x and y must have the same size, at least 1");
  for (std::size_t i = 1; i < x_.size(); ++i) {
    if (!(x_[i] > x_[i - 1]))
      throw std::invalid_argument("Polyline: x must be strictly increasing");
    slope_.push_back((y_[i] - y_[i - 1]) / (x_[i] - x_[i - 1]));
    integral_[i] = integral_[i - 1] + 0.5 * (y_[i] + y_[i - 1]) * (x_[i] - x_[i - 1]);
  }
}

std::size_t Polyline::piece(double x) const {
  if (x_.size() == 2) return 0;
  const auto after = std::upper_bound(x_.begin(), x_.end(), x);
  const auto i = static_cast<std::size_t>(after - x_.begin());
  return std::clamp<std::size_t>(i, 1, x_.size() - 1) - 1;
}

double Polyline::slope(double x) const {
  return x_.size() < 2 ? 0.0 : slope_[piece(x)];
}

double Polyline::operator()(double x) const {
  if (x_.size() < 2) return y_[0] + 0.0 * x;
  const std::size_t i = piece(x);
  return y_[i] + slope_[i] * (x - x_[i]);
}

double Polyline::integral(double x) const {
  if (x_.size() < 2) return y_[0] * x;
  const std::size_t i = piece(x);
  return integral_[i] + 0.5 * (y_[i] + (*this)(x)) * (x - x_[i]);
}

}  // namespace clickwise::core
