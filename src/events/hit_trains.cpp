#include "clickwise/events/hit_trains.hpp"

#include <fmt/format.h>

#include <cmath>
#include <stdexcept>

namespace clickwise::events {

namespace {

// A compression from a low turning point to the next high one.
struct Hit {
  double start_s;
  double start_m;
  double end_s;
  int stretch;  // unmasked stretches are numbered; a train stays in one
};

// A hit starts when travel leaves its low, not when it got there: an end may rest in between.
constexpr double at_rest_share = 0.25;  // of the threshold

// Turning points with hysteresis: a turn counts when travel has moved `threshold` back from it.
class HitFinder {
public:
  HitFinder(double threshold_m, std::vector<Hit>& hits) : threshold_m_(threshold_m), hits_(hits) {}

  void restart() {
    state_ = State::fresh;
    ++stretch_;
  }

  void sample(double t_s, double x) {
    if (state_ == State::fresh) {
      low_ = high_ = {t_s, x};
      state_ = State::falling;
    }
    if (state_ == State::falling) {
      if (x < low_.x) low_.x = x;
      if (x <= low_.x + at_rest_share * threshold_m_) low_.t_s = t_s;
      if (x - low_.x < threshold_m_) return;
      high_ = {t_s, x};
      state_ = State::rising;
      return;
    }
    if (x > high_.x) high_ = {t_s, x};
    if (high_.x - x < threshold_m_) return;
    hits_.push_back({low_.t_s, low_.x, high_.t_s, stretch_});
    low_ = {t_s, x};
    state_ = State::falling;
  }

private:
  enum class State { fresh, falling, rising };
  struct Turn {
    double t_s;
    double x;
  };

  double threshold_m_;
  std::vector<Hit>& hits_;
  State state_ = State::fresh;
  int stretch_ = 0;
  Turn low_{}, high_{};
};

std::vector<Hit> hits_of(const run::Motion& motion, std::span<const std::uint8_t> counted,
                         double threshold_m) {
  std::vector<Hit> hits;
  HitFinder finder(threshold_m, hits);
  for (std::size_t i = 0; i < counted.size(); ++i) {
    if (counted[i] != 0 && std::isfinite(motion.travel_m[i]))
      finder.sample(motion.time.at(i), motion.travel_m[i]);
    else
      finder.restart();
  }
  return hits;
}

// Least-squares slope of the start travel over the number of the hit.
double climb_m_per_hit(std::span<const Hit> hits) {
  const auto n = static_cast<double>(hits.size());
  const double middle = (n - 1.0) / 2.0;
  double products = 0.0;
  for (std::size_t i = 0; i < hits.size(); ++i)
    products += (static_cast<double>(i) - middle) * hits[i].start_m;
  return products * 12.0 / (n * (n * n - 1.0));
}

void check(const run::Motion& motion, std::span<const std::uint8_t> counted,
           const HitTrainOptions& options) {
  const auto positive = [](const char* name, double value) {
    if (!(value > 0.0) || !std::isfinite(value))
      throw std::invalid_argument(fmt::format("{} = {}; must be positive and finite", name, value));
  };
  positive("stroke_m", options.stroke_m);
  positive("least_rise_share", options.least_rise_share);
  positive("longest_spacing_s", options.longest_spacing_s);
  if (options.fewest_hits < 2)
    throw std::invalid_argument(
        fmt::format("fewest_hits = {}; must be 2 or more", options.fewest_hits));
  if (motion.travel_m.size() != counted.size())
    throw std::invalid_argument(fmt::format("counted = {} samples; must be as many as travel, {}",
                                            counted.size(), motion.travel_m.size()));
}

}  // namespace

std::vector<run::HitTrain> hit_trains(const run::Motion& motion,
                                      std::span<const std::uint8_t> counted,
                                      const HitTrainOptions& options) {
  check(motion, counted, options);
  const auto hits = hits_of(motion, counted, options.least_rise_share * options.stroke_m);
  std::vector<run::HitTrain> trains;
  for (std::size_t begin = 0; begin < hits.size();) {
    std::size_t end = begin + 1;
    while (end < hits.size() && hits[end].stretch == hits[begin].stretch &&
           hits[end].start_s - hits[end - 1].start_s <= options.longest_spacing_s)
      ++end;
    const std::span<const Hit> train(hits.data() + begin, end - begin);
    if (train.size() >= static_cast<std::size_t>(options.fewest_hits))
      trains.push_back({train.front().start_s, train.back().end_s, static_cast<int>(train.size()),
                        train.front().start_m, climb_m_per_hit(train)});
    begin = end;
  }
  return trains;
}

}  // namespace clickwise::events
