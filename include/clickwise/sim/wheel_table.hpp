// What a spring and a linkage do at the wheel, tabulated once so that a step is three look-ups.
#pragma once

#include <cstddef>
#include <functional>
#include <vector>

#include "clickwise/core/polyline.hpp"

namespace clickwise::sim {

// Shaft travel, spring force and ratio over wheel travel z on a uniform grid from 0 to the wheel's
// full travel Z; straight between the nodes and straight on beyond them.
//
//   z(x) = integral from 0 to x of r                                                   (1)
//   F_wheel(z) = F_shaft(x(z)) / r(x(z))                                               (2)
struct WheelTable {
  struct Node {
    double shaft_m = 0.0;
    double spring_n = 0.0;       // at the wheel, (2)
    double inverse_ratio = 1.0;  // dx/dz = 1 / r
  };

  double cell_m = 0.0;
  double wheel_travel_m = 0.0;  // Z
  std::vector<Node> nodes;

  // `shaft_force_n` over shaft travel in m, called on [0, stroke]. Throws std::invalid_argument
  // when the stroke or any ratio on it is not positive. Interpolation error is second order in the
  // cell, first order at a kink of a table: below 1e-8 m and 1 N for the springs of a bike at the
  // default number of cells.
  WheelTable(double stroke_m, const core::Polyline& ratio,
             const std::function<double(double)>& shaft_force_n, std::size_t cells = 1024);

  // NaN gives NaN.
  Node at(double wheel_travel_m) const {
    const double cells = static_cast<double>(nodes.size() - 1);
    const double u = wheel_travel_m / cell_m;
    const double clamped = u > 0.0 ? (u < cells ? u : cells - 1.0) : 0.0;
    const auto i = static_cast<std::size_t>(clamped);
    const double w = u - static_cast<double>(i);
    const Node& a = nodes[i];
    const Node& b = nodes[i + 1];
    return {a.shaft_m + w * (b.shaft_m - a.shaft_m), a.spring_n + w * (b.spring_n - a.spring_n),
            a.inverse_ratio + w * (b.inverse_ratio - a.inverse_ratio)};
  }

  // Energy stored in the spring at a wheel travel, J: the exact integral of the tabulated force.
  double stored_j(double wheel_travel_m) const;
};

}  // namespace clickwise::sim
