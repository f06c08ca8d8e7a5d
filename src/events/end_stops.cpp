#include "clickwise/events/end_stops.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <optional>
#include <stdexcept>
#include <utility>

#include "hermite.hpp"

namespace clickwise::events {

namespace {

constexpr double least_rearm_m = 15e-3;  // contract section 1
constexpr double rearm_withins = 4.0;

void check(const char* name, double value, bool zero_allowed) {
  if (!std::isfinite(value) || value < 0.0 || (value == 0.0 && !zero_allowed))
    throw std::invalid_argument(fmt::format("{} = {}; must be {} and finite", name, value,
                                            zero_allowed ? "0 or more" : "positive"));
}

// Excursions above a line, of travel seen with a sign: +1 for bottom-outs, -1 for top-outs, whose
// levels are below zero then.
struct Line {
  double sign;
  double level_m;
  double rearm_m;
  double least_speed_m_s;
  double mass_kg;
};

class Excursions {
public:
  Excursions(const run::Motion& motion, std::span<const std::uint8_t> counted, const Line& line)
      : motion_(motion), counted_(counted), line_(line) {}

  std::vector<run::EndStop> find() {
    bool usable_before = false;
    for (std::size_t i = 0; i < counted_.size(); ++i) {
      const bool follows = std::exchange(usable_before, usable(i));
      if (!usable_before) continue;
      if (follows)
        between(i - 1);
      else if (x(i) >= line_.level_m)
        armed_ = false;  // the crossing was not seen
      at(i);
    }
    return std::move(found_);
  }

private:
  bool usable(std::size_t i) const {
    return counted_[i] != 0 && std::isfinite(motion_.travel_m[i]) &&
           std::isfinite(motion_.velocity_m_s[i]);
  }
  double x(std::size_t i) const { return line_.sign * motion_.travel_m[i]; }
  double v(std::size_t i) const { return line_.sign * motion_.velocity_m_s[i]; }

  void between(std::size_t i) {
    const bool turns = v(i) > 0.0 && v(i + 1) < 0.0;
    const bool reaches = x(i + 1) >= line_.level_m || (turns && may_reach(i));
    if (!(armed_ && reaches) && !(open_ && turns)) return;
    const double interval_s = motion_.time.interval_s();
    const Hermite curve(x(i), v(i), x(i + 1), v(i + 1), interval_s);
    if (armed_ && x(i) < line_.level_m) {
      const auto s = curve.first_reach(line_.level_m);
      if (s) cross(motion_.time.at(i) + *s * interval_s, curve.slope(*s));
    }
    if (turns) deepen(curve.value(curve.highest()));
  }

  // A turn's cubic stays below this: its weights of the velocities are 4/27 at most.
  bool may_reach(std::size_t i) const {
    const double rise_m = 4.0 / 27.0 * motion_.time.interval_s() * (v(i) - v(i + 1));
    return std::max(x(i), x(i + 1)) + rise_m >= line_.level_m;
  }

  void at(std::size_t i) {
    deepen(x(i));
    if (x(i) >= line_.rearm_m) return;
    armed_ = true;
    open_ = false;
  }

  void cross(double t_s, double speed_m_s) {
    armed_ = false;
    open_ = speed_m_s >= line_.least_speed_m_s;
    if (!open_) return;
    found_.push_back({t_s, line_.sign * line_.level_m, line_.sign * speed_m_s,
                      0.5 * line_.mass_kg * speed_m_s * speed_m_s});
  }

  void deepen(double depth_m) {
    if (!open_) return;
    double& depth = found_.back().depth_m;
    depth = line_.sign * std::max(line_.sign * depth, depth_m);
  }

  const run::Motion& motion_;
  std::span<const std::uint8_t> counted_;
  Line line_;
  bool armed_ = true;
  bool open_ = false;  // found_.back() is the excursion under way
  std::vector<run::EndStop> found_;
};

std::vector<run::EndStop> excursions(const run::Motion& motion,
                                     std::span<const std::uint8_t> counted, const Line& line) {
  if (motion.travel_m.size() != counted.size() || motion.velocity_m_s.size() != counted.size())
    throw std::invalid_argument(fmt::format("counted = {} samples; must be as many as travel, {}",
                                            counted.size(), motion.travel_m.size()));
  return Excursions(motion, counted, line).find();
}

double rearm_distance_m(double within_m) {
  return std::max(rearm_withins * within_m, least_rearm_m);
}

}  // namespace

std::vector<run::EndStop> bottom_outs(const run::Motion& motion,
                                      std::span<const std::uint8_t> counted,
                                      const BottomOutOptions& options) {
  check("stroke_m", options.stroke_m, false);
  check("within_m", options.within_m, false);
  check("moving_mass_kg", options.moving_mass_kg, true);
  return excursions(motion, counted,
                    {+1.0, options.stroke_m - options.within_m,
                     options.stroke_m - rearm_distance_m(options.within_m),
                     -std::numeric_limits<double>::infinity(), options.moving_mass_kg});
}

std::vector<run::EndStop> top_outs(const run::Motion& motion, std::span<const std::uint8_t> counted,
                                   const TopOutOptions& options) {
  check("within_m", options.within_m, false);
  check("least_speed_m_s", options.least_speed_m_s, true);
  check("moving_mass_kg", options.moving_mass_kg, true);
  return excursions(motion, counted,
                    {-1.0, -options.within_m, -rearm_distance_m(options.within_m),
                     options.least_speed_m_s, options.moving_mass_kg});
}

}  // namespace clickwise::events
