// Interpolation between readings. Private to motion.
#pragma once

#include <array>

namespace clickwise::motion {

// A travel at a position on the base (in samples).
struct Node {
  double place;
  double travel_m;
};

inline double straight(const Node& a, const Node& b, double place) {
  return a.travel_m + (place - a.place) / (b.place - a.place) * (b.travel_m - a.travel_m);
}

// The cubic through four nodes at different places (Lagrange).
inline double cubic(const std::array<Node, 4>& nodes, double place) {
  double sum = 0.0;
  for (const Node& node : nodes) {
    double above = 1.0, below = 1.0;
    for (const Node& other : nodes) {
      if (&other == &node) continue;
      above *= place - other.place;
      below *= node.place - other.place;
    }
    sum += above / below * node.travel_m;
  }
  return sum;
}

}  // namespace clickwise::motion
