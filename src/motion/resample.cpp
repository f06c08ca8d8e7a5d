#include "resample.hpp"

#include <algorithm>
#include <cmath>

#include "lagrange.hpp"

namespace clickwise::motion {

namespace {

constexpr double coincident = 0.25;   // nearer stamps are one reading (samples)
constexpr double closest_safe = 0.4;  // nearer nodes make a cubic swing
constexpr double on_node = 1e-9;
constexpr std::size_t nodes_at_once = 2048;
constexpr std::size_t nodes_of_cubic = 4;

// Cubics between nodes, from one to the next, in Newton's form: each shares most of its divided
// differences with the one before.
class Cubics {
public:
  explicit Cubics(const std::vector<Node>& nodes) : nodes_(nodes) {}

  // Between nodes k and k + 1, with two nodes on either side; k never falls from one call to the
  // next.
  double value(std::size_t k, double place) {
    move_to(k);
    const Node& here = nodes_[k];
    if (closest_ < closest_safe) return straight(here, nodes_[k + 1], place);
    const Node& before = nodes_[k - 1];
    const double bend = second_ + (place - nodes_[k + 1].place) * third_;
    return before.travel_m + (place - before.place) * (first_ + (place - here.place) * bend);
  }

  // The first nodes are gone.
  void forget(std::size_t nodes) { at_ = at_ > nodes ? at_ - nodes : 0; }

private:
  double gap(std::size_t i) const { return nodes_[i + 1].place - nodes_[i].place; }
  double slope(std::size_t i) const {
    return (nodes_[i + 1].travel_m - nodes_[i].travel_m) / gap(i);
  }

  void move_to(std::size_t k) {
    if (k == at_) return;
    const bool follows = at_ > 0 && k == at_ + 1;
    first_ = follows ? middle_slope_ : slope(k - 1);
    middle_slope_ = follows ? last_slope_ : slope(k);
    last_slope_ = slope(k + 1);
    second_ = follows ? next_second_
                      : (middle_slope_ - first_) / (nodes_[k + 1].place - nodes_[k - 1].place);
    next_second_ = (last_slope_ - middle_slope_) / (nodes_[k + 2].place - nodes_[k].place);
    third_ = (next_second_ - second_) / (nodes_[k + 2].place - nodes_[k - 1].place);
    closest_ = std::min({gap(k - 1), gap(k), gap(k + 1)});
    at_ = k;
  }

  const std::vector<Node>& nodes_;
  std::size_t at_ = 0;  // 0: nowhere yet
  double first_ = 0.0, second_ = 0.0, third_ = 0.0;
  double middle_slope_ = 0.0, last_slope_ = 0.0, next_second_ = 0.0;
  double closest_ = 0.0;
};

// Lays the readings of one piece on the base as they come; few of them are held at a time.
class PieceBuilder {
public:
  // Samples [first, end) of the base are to be filled where the readings span them.
  PieceBuilder(std::size_t first, std::size_t end) : next_(first), end_(end), cubics_(nodes_) {
    piece_.first = first;
    piece_.travel_m.reserve(end - first);
    nodes_.reserve(nodes_at_once + 1);
  }

  // Near coincident readings are merged, since a cubic through both would swing.
  void add(Node node) {
    if (!nodes_.empty() && node.place - nodes_.back().place < coincident) {
      Node& last = nodes_.back();
      last = {0.5 * (last.place + node.place), 0.5 * (last.travel_m + node.travel_m)};
      return;
    }
    if (nodes_.size() == nodes_at_once) let_go();
    nodes_.push_back(node);
  }

  Piece close() {
    fill_before(nodes_.size());
    return std::move(piece_);
  }

private:
  // Fills what lies between the nodes held, but for the last, which may yet be merged with the
  // next, and keeps what is needed to go on.
  void let_go() {
    fill_before(nodes_.size() - 3);
    const std::size_t gone = std::min(k_ > 0 ? k_ - 1 : 0, nodes_.size() - nodes_of_cubic);
    nodes_.erase(nodes_.begin(), nodes_.begin() + static_cast<std::ptrdiff_t>(gone));
    k_ -= gone;
    cubics_.forget(gone);
    at_begin_ = at_begin_ && gone == 0;
  }

  // Samples that lie on or behind node k and before node k + 1, for all k below `limit`.
  void fill_before(std::size_t limit) {
    for (; next_ < end_; ++next_) {
      const auto place = static_cast<double>(next_);
      while (k_ + 1 < nodes_.size() && nodes_[k_ + 1].place <= place + on_node) ++k_;
      if (k_ >= limit) return;
      piece_.travel_m.push_back(value(place));
    }
  }

  double value(double place) {
    const Node& here = nodes_[k_];
    if (std::abs(place - here.place) < on_node || k_ + 1 == nodes_.size()) return here.travel_m;
    const bool at_end = k_ + 2 >= nodes_.size() || (k_ == 0 && at_begin_);
    return at_end ? straight(here, nodes_[k_ + 1], place) : cubics_.value(k_, place);
  }

  std::size_t next_;  // sample
  std::size_t end_;
  std::vector<Node> nodes_;
  std::size_t k_ = 0;     // the node before the next sample
  bool at_begin_ = true;  // the first node held is the piece's first
  Cubics cubics_;
  Piece piece_;
};

// The readings from `begin` on up to a hole of more than the longest bridge; one behind the last.
std::size_t end_of_piece(std::span<const std::uint8_t> usable, std::size_t begin, std::size_t end,
                         int longest_bridge) {
  std::size_t behind = begin;
  int hole = 0;
  for (std::size_t i = begin; i < end && hole <= longest_bridge; ++i) {
    hole = usable[i] != 0 ? 0 : hole + 1;
    if (hole == 0) behind = i + 1;
  }
  return behind;
}

}  // namespace

std::vector<Piece> resample(const run::Recording& recording, const UniformClock& clock,
                            std::span<const double> travel_m, std::span<const std::uint8_t> usable,
                            int longest_bridge) {
  std::vector<Piece> pieces;
  std::size_t free = 0;
  for (const run::Stretch& stretch : recording.stretches) {
    for (std::size_t begin = stretch.begin; begin < stretch.end; ++begin) {
      if (usable[begin] == 0) continue;
      const std::size_t end = end_of_piece(usable, begin, stretch.end, longest_bridge);
      const auto first = std::max(
          free, static_cast<std::size_t>(std::max(0.0, std::ceil(clock.place[begin] - on_node))));
      const auto behind =
          std::min(clock.base.samples, static_cast<std::size_t>(std::max(
                                           0.0, std::floor(clock.place[end - 1] + on_node) + 1.0)));
      if (first < behind) {
        PieceBuilder builder(first, behind);
        for (std::size_t i = begin; i < end; ++i)
          if (usable[i] != 0) builder.add({clock.place[i], travel_m[i]});
        pieces.push_back(builder.close());
        free = first + pieces.back().travel_m.size();
      }
      begin = end;
    }
  }
  return pieces;
}

}  // namespace clickwise::motion
