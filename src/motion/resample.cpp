#include "resample.hpp"

#include <algorithm>
#include <cmath>

#include "lagrange.hpp"

namespace clickwise::motion {

namespace {

constexpr double coincident = 0.25;   // nearer stamps are one reading (samples)
constexpr double closest_safe = 0.4;  // nearer nodes make a cubic swing
constexpr double on_node = 1e-9;

// Adds a reading; near coincident ones are merged, since a cubic through both would swing.
void add(std::vector<Node>& nodes, Node node) {
  if (nodes.empty() || node.place - nodes.back().place >= coincident) {
    nodes.push_back(node);
    return;
  }
  Node& last = nodes.back();
  last = {0.5 * (last.place + node.place), 0.5 * (last.travel_m + node.travel_m)};
}

bool safe(std::span<const Node> nodes) {
  for (std::size_t i = 0; i + 1 < nodes.size(); ++i)
    if (nodes[i + 1].place - nodes[i].place < closest_safe) return false;
  return true;
}

// Between nodes k and k + 1.
double value(const std::vector<Node>& nodes, std::size_t k, double place) {
  if (std::abs(place - nodes[k].place) < on_node) return nodes[k].travel_m;
  if (k + 1 == nodes.size()) return nodes[k].travel_m;
  if (k == 0 || k + 2 >= nodes.size() || !safe(std::span(nodes).subspan(k - 1, 4)))
    return straight(nodes[k], nodes[k + 1], place);
  return cubic({nodes[k - 1], nodes[k], nodes[k + 1], nodes[k + 2]}, place);
}

// The base samples that the nodes span, from `free` on.
Piece piece_of(const std::vector<Node>& nodes, std::size_t free, std::size_t samples) {
  Piece piece;
  const double first =
      std::max(std::ceil(nodes.front().place - on_node), static_cast<double>(free));
  const double last =
      std::min(std::floor(nodes.back().place + on_node), static_cast<double>(samples) - 1.0);
  piece.first = static_cast<std::size_t>(first);
  if (last >= first) piece.travel_m.reserve(static_cast<std::size_t>(last - first) + 1);
  std::size_t k = 0;
  for (double place = first; place <= last; place += 1.0) {
    while (k + 1 < nodes.size() && nodes[k + 1].place <= place + on_node) ++k;
    piece.travel_m.push_back(value(nodes, k, place));
  }
  return piece;
}

}  // namespace

std::vector<Piece> resample(const run::Recording& recording, const UniformClock& clock,
                            std::span<const double> travel_m, std::span<const std::uint8_t> usable,
                            int longest_bridge) {
  std::vector<Piece> pieces;
  std::vector<Node> nodes;
  nodes.reserve(travel_m.size());
  std::size_t free = 0;
  const auto close = [&] {
    if (nodes.empty()) return;
    Piece piece = piece_of(nodes, free, clock.base.samples);
    nodes.clear();
    if (piece.travel_m.empty()) return;
    free = piece.first + piece.travel_m.size();
    pieces.push_back(std::move(piece));
  };
  for (const run::Stretch& stretch : recording.stretches) {
    int hole = 0;
    for (std::size_t i = stretch.begin; i < stretch.end; ++i) {
      if (usable[i] == 0) {
        if (++hole > longest_bridge) close();
        continue;
      }
      hole = 0;
      add(nodes, {clock.place[i], travel_m[i]});
    }
    close();
  }
  return pieces;
}

}  // namespace clickwise::motion
