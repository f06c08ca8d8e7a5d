// A function given by points, straight between them: calibrations, spring tables, ratio tables.
#pragma once

#include <vector>

namespace clickwise::core {

// y(x), straight between the points and straight on beyond them with the end slopes.
// Built from at least two points with strictly increasing x (one point: a constant).
// NaN in gives NaN out. O(log n) a look-up.
class Polyline {
 public:
  Polyline() = default;

  // Throws std::invalid_argument when x is empty, not strictly increasing, or sizes differ.
  Polyline(std::vector<double> x, std::vector<double> y);

  // A constant function.
  static Polyline constant(double y) { return Polyline({0.0}, {y}); }

  double operator()(double x) const;

  // dy/dx of the piece that holds x (the right-hand piece at a point, the last one at the end).
  double slope(double x) const;

  // Integral of y from the first point's x (or from 0, for a constant) to x.
  double integral(double x) const;

  bool empty() const { return x_.empty(); }
  const std::vector<double>& x() const { return x_; }
  const std::vector<double>& y() const { return y_; }

 private:
  std::size_t piece(double x) const;

  std::vector<double> x_;
  std::vector<double> y_;
  std::vector<double> slope_;     // of each piece
  std::vector<double> integral_;  // at each point
};

}  // namespace clickwise::core
