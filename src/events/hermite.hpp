// The curve between two samples of travel and velocity: a cubic, eq. E1. Private to events.
#pragma once

#include <optional>

namespace clickwise::events {

// x(s), s in [0, 1] over one interval; velocities are per second.
class Hermite {
public:
  Hermite(double x0, double v0, double x1, double v1, double interval_s)
      : interval_s_(interval_s),
        a_(2.0 * x0 - 2.0 * x1 + (v0 + v1) * interval_s),
        b_(-3.0 * x0 + 3.0 * x1 - (2.0 * v0 + v1) * interval_s),
        c_(v0 * interval_s),
        d_(x0) {}

  double value(double s) const { return ((a_ * s + b_) * s + c_) * s + d_; }
  double slope(double s) const { return ((3.0 * a_ * s + 2.0 * b_) * s + c_) / interval_s_; }

  // Where the curve is highest.
  double highest() const;

  // The first s at which the curve, starting below it, reaches the level; empty when it does not.
  std::optional<double> first_reach(double level) const;

private:
  double interval_s_;
  double a_, b_, c_, d_;
};

}  // namespace clickwise::events
