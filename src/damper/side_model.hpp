// One direction of a dyno table as a least-squares problem: its points, its parameters, its law.
#pragma once

#include <Eigen/Core>
#include <optional>
#include <vector>

#include "clickwise/damper/law.hpp"
#include "clickwise/damper/least_squares.hpp"

namespace clickwise::damper {

// Magnitudes along the direction; the force is negative where it has the other sign. `out` is the
// share of the adjuster's clicks that it is turned out, 0 to 1; 0 where it stays as it is.
struct SidePoint {
  double speed_m_s = 0.0;
  double force_n = 0.0;
  double bleed_out = 0.0;
  double valve_out = 0.0;
  int line = 0;
};

// Where each parameter stands in the vector; spans and port are left out (-1) where they do not
// move. B = bleed + bleed_span out; F_o = valve + valve_span (1 - out). All are at least 0, which
// keeps an open bleed above a closed one and a closed valve above an open one.
struct SideLayout {
  Eigen::Index bleed = 0;
  Eigen::Index valve = 1;
  Eigen::Index slope = 2;
  Eigen::Index bleed_span = -1;
  Eigen::Index valve_span = -1;
  Eigen::Index port = -1;
  double fixed_port_n_s2_m2 = 0.0;  // without a place for it
  bool valve_held = false;          // valve, its span and slope stay as they are
  Eigen::Index size = 3;

  Law law(const Eigen::VectorXd& p, const SidePoint& point) const;
};

// The layout for these points: spans for adjusters of which two settings or more were measured.
SideLayout layout_of(const std::vector<SidePoint>& points, bool with_port);

// Least squares of (F(v) - F_i) / sigma_i over the points that `use` keeps. `knee` is where a
// robust loss goes over from squares to straight lines, in sigmas (infinite: squares all the way).
struct SideWeights {
  std::vector<double> sigma_n;
  std::vector<bool> use;
  double knee;
};

LeastSquaresProblem problem_of(const std::vector<SidePoint>& points, const SideLayout& layout,
                               const SideWeights& weights);

// Whether at some point at least a twentieth of the flow goes through the valve, or the bleed.
struct Seen {
  bool bleed = false;
  bool valve = false;
};
Seen seen_by(const std::vector<SidePoint>& points, const SideLayout& layout,
             const Eigen::VectorXd& p);

// Holds the valve shut at all points: it opens at 1.2 times the largest force, with the slope of
// the points' largest force over their fastest speed.
void hold_valve_shut(const std::vector<SidePoint>& points, SideLayout& layout, Eigen::VectorXd& p);

// Starts spread over what the points allow: the valve opening low, in the middle, high,
// or never.
std::vector<Eigen::VectorXd> starts_of(const std::vector<SidePoint>& points,
                                       const SideLayout& layout);

}  // namespace clickwise::damper
