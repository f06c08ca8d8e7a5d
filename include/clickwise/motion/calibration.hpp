// From readings to shaft travel. docs/method/motion.md, M9.
#pragma once

#include <cstdint>
#include <span>
#include <string>
#include <vector>

#include "clickwise/core/polyline.hpp"

namespace clickwise::motion {

// How far, and for how long, the travel lies beyond one end of the stroke.
struct Excess {
  double most_m = 0.0;   // >= 0
  double seconds = 0.0;  // time beyond by more than the tolerance
};

struct StrokeExcess {
  Excess beyond_stroke;
  Excess below_zero;
};

// travel_m of each reading, straight on beyond the calibration's ends. NaN stays NaN.
std::vector<double> to_travel(std::span<const double> readings, const core::Polyline& travel_m);

// Over the samples with usable != 0. Time counts beyond max(2 mm, 1 % of the stroke). Nothing is
// clipped: a sensor that reads beyond the stroke is for the user to calibrate.
StrokeExcess stroke_excess(std::span<const double> travel_m, std::span<const std::uint8_t> usable,
                           double interval_s, double stroke_m);

// One sentence for each end of the stroke that is passed by more than the tolerance.
std::vector<std::string> describe(const StrokeExcess& excess, double stroke_m,
                                  const std::string& channel);

}  // namespace clickwise::motion
