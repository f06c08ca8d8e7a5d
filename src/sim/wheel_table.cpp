#include "clickwise/sim/wheel_table.hpp"

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace clickwise::sim {

namespace {

// x with z(x) = wheel_m, by Newton's rule held inside a shrinking bracket.
double shaft_at(double wheel_m, double stroke_m, const core::Polyline& ratio) {
  const double start = ratio.integral(0.0);
  double low = 0.0;
  double high = stroke_m;
  double x = 0.5 * stroke_m;
  for (int i = 0; i < 60; ++i) {
    const double excess = ratio.integral(x) - start - wheel_m;
    (excess > 0.0 ? high : low) = x;
    const double newton = x - excess / ratio(x);
    const double next = newton >= low && newton <= high ? newton : 0.5 * (low + high);
    if (std::abs(next - x) < 1e-15) return next;
    x = next;
  }
  return x;
}

void require_positive_ratio(double stroke_m, const core::Polyline& ratio) {
  const bool ends = ratio(0.0) > 0.0 && ratio(stroke_m) > 0.0;
  const bool inside = std::all_of(ratio.x().begin(), ratio.x().end(), [&](double x) {
    return x < 0.0 || x > stroke_m || ratio(x) > 0.0;
  });
  if (!(stroke_m > 0.0) || !ends || !inside)
    throw std::invalid_argument("WheelTable: stroke and ratio must be positive");
}

}  // namespace

WheelTable::WheelTable(double stroke_m, const core::Polyline& ratio,
                       const std::function<double(double)>& shaft_force_n, std::size_t cells) {
  require_positive_ratio(stroke_m, ratio);
  wheel_travel_m = ratio.integral(stroke_m) - ratio.integral(0.0);
  cell_m = wheel_travel_m / static_cast<double>(cells);
  nodes.reserve(cells + 1);
  for (std::size_t i = 0; i <= cells; ++i) {
    const double wheel_m = std::min(cell_m * static_cast<double>(i), wheel_travel_m);
    const double x = i == cells ? stroke_m : shaft_at(wheel_m, stroke_m, ratio);
    const double r = ratio(x);
    nodes.push_back({x, shaft_force_n(x) / r, 1.0 / r});
  }
}

double WheelTable::stored_j(double wheel_travel) const {
  const auto last = static_cast<double>(nodes.size() - 1);
  const double u = std::clamp(wheel_travel / cell_m, 0.0, last);
  double sum = 0.0;
  for (std::size_t i = 0; i < static_cast<std::size_t>(u); ++i)
    sum += 0.5 * cell_m * (nodes[i].spring_n + nodes[i + 1].spring_n);
  const double from = cell_m * std::floor(u);
  return sum + 0.5 * (wheel_travel - from) * (at(from).spring_n + at(wheel_travel).spring_n);
}

}  // namespace clickwise::sim
