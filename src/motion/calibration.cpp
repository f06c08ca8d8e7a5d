#include "clickwise/motion/calibration.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/core/units.hpp"

namespace clickwise::motion {

namespace {

double tolerance_m(double stroke_m) {
  return std::max(2e-3, 0.01 * stroke_m);
}

void add(Excess& excess, double beyond_m, double interval_s, double tolerance) {
  excess.most_m = std::max(excess.most_m, beyond_m);
  if (beyond_m > tolerance) excess.seconds += interval_s;
}

}  // namespace

std::vector<double> to_travel(std::span<const double> readings, const core::Polyline& travel_m) {
  std::vector<double> travel(readings.size());
  std::ranges::transform(readings, travel.begin(),
                         [&](double reading) { return travel_m(reading); });
  return travel;
}

StrokeExcess stroke_excess(std::span<const double> travel_m, std::span<const std::uint8_t> usable,
                           double interval_s, double stroke_m) {
  StrokeExcess excess;
  for (std::size_t i = 0; i < travel_m.size(); ++i) {
    const bool inside = travel_m[i] >= 0.0 && travel_m[i] <= stroke_m;
    if (inside || usable[i] == 0) continue;
    add(excess.beyond_stroke, travel_m[i] - stroke_m, interval_s, tolerance_m(stroke_m));
    add(excess.below_zero, -travel_m[i], interval_s, tolerance_m(stroke_m));
  }
  return excess;
}

std::vector<std::string> describe(const StrokeExcess& excess, double stroke_m,
                                  const std::string& channel) {
  std::vector<std::string> notes;
  const auto say = [&](const Excess& end, const char* where) {
    if (end.most_m <= tolerance_m(stroke_m)) return;
    notes.push_back(fmt::format(
        "{} reads up to {:.1f} mm {}, for {:.2f} s in all; check the calibration at both ends of "
        "the stroke, and stroke_mm",
        channel, core::to_mm(end.most_m), where, end.seconds));
  };
  say(excess.beyond_stroke, "beyond the stroke");
  say(excess.below_zero, "beyond full extension");
  return notes;
}

}  // namespace clickwise::motion
