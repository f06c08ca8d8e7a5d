#include "clickwise/motion/potentiometer.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/signal/smoother.hpp"
#include "resample.hpp"

namespace clickwise::motion {

namespace {

run::Motion empty_motion(const run::TimeBase& base) {
  const double unknown = std::numeric_limits<double>::quiet_NaN();
  run::Motion motion;
  motion.time = base;
  motion.source = run::Source::potentiometer;
  motion.travel_m.assign(base.samples, unknown);
  motion.velocity_m_s.assign(base.samples, unknown);
  motion.velocity_sigma_m_s.assign(base.samples, unknown);
  motion.valid.assign(base.samples, 0);
  return motion;
}

// The part of the motion that a piece fills.
signal::SmoothedSeries part_of(run::Motion& motion, const Piece& piece) {
  const auto part = [&](std::vector<double>& series) {
    return std::span(series).subspan(piece.first, piece.travel_m.size());
  };
  return {part(motion.travel_m), part(motion.velocity_m_s), part(motion.velocity_sigma_m_s)};
}

// No reading stands behind the bridge over a masked sample.
void clear_bridges(run::Motion& motion, const UniformClock& clock,
                   const std::vector<std::uint8_t>& usable) {
  for (std::size_t i = 0; i < usable.size(); ++i) {
    if (usable[i] != 0) continue;
    const auto place = static_cast<std::size_t>(std::max(0LL, std::llround(clock.place[i])));
    if (place < motion.valid.size()) motion.valid[place] = 0;
  }
}

struct PieceCutoff {
  double cutoff_hz;
  std::size_t samples;
};

double median_cutoff_hz(std::vector<PieceCutoff> cutoffs) {
  std::ranges::sort(cutoffs, {}, &PieceCutoff::cutoff_hz);
  std::size_t all = 0;
  for (const PieceCutoff& cutoff : cutoffs) all += cutoff.samples;
  std::size_t passed = 0;
  for (const PieceCutoff& cutoff : cutoffs) {
    passed += cutoff.samples;
    if (2 * passed >= all) return cutoff.cutoff_hz;
  }
  return 0.0;
}

// Smooths each piece into the motion; false when none was long enough.
bool smooth_into(run::Motion& motion, const std::vector<Piece>& pieces,
                 const MotionOptions& options) {
  std::vector<std::span<const double>> readings;
  for (const Piece& piece : pieces) readings.emplace_back(piece.travel_m);
  signal::SmootherOptions smoother;
  smoother.fixed_span_s = options.smooth_span_s;
  const signal::SmootherModel model = signal::fit_smoother(readings, motion.time.rate_hz, smoother);
  motion.velocity_noise_m_s = model.rest_velocity_noise_m_s;
  motion.reading_noise_m = model.noise_m;
  motion.smoothing = signal::describe(model);
  std::vector<PieceCutoff> cutoffs;
  for (const Piece& piece : pieces) {
    if (piece.travel_m.size() < signal::shortest_stretch(model)) continue;
    const double cutoff_hz = signal::smooth(piece.travel_m, model, part_of(motion, piece));
    std::fill_n(motion.valid.begin() + static_cast<std::ptrdiff_t>(piece.first),
                piece.travel_m.size(), std::uint8_t{1});
    cutoffs.push_back({cutoff_hz, piece.travel_m.size()});
  }
  motion.cutoff_hz = median_cutoff_hz(cutoffs);
  return !cutoffs.empty();
}

}  // namespace

PotentiometerMotion from_potentiometer(const run::Recording& recording, std::size_t channel,
                                       const bike::End& end, const UniformClock& clock,
                                       const MotionOptions& options) {
  const run::Channel& readings = recording.channels.at(channel);
  ReadingFaults found =
      find_reading_faults(recording, channel, {end.sensor.travel_m, end.stroke_m}, options.faults);
  PotentiometerMotion result{empty_motion(clock.base), std::move(found.faults), {}, {}};
  result.excess = stroke_excess(found.travel_m, found.usable, recording.interval_s, end.stroke_m);
  result.notes = describe(result.excess, end.stroke_m, readings.name);
  const auto pieces =
      resample(recording, clock, found.travel_m, found.usable, options.longest_bridge_samples);
  if (pieces.empty() || !smooth_into(result.motion, pieces, options))
    result.notes.push_back(fmt::format(
        "{} has no stretch of usable readings; check its plug, its column and its calibration",
        readings.name));
  clear_bridges(result.motion, clock, found.usable);
  return result;
}

PotentiometerMotion from_potentiometer(const run::Recording& recording, std::size_t channel,
                                       const bike::End& end, const MotionOptions& options) {
  return from_potentiometer(recording, channel, end, uniform_clock(recording), options);
}

}  // namespace clickwise::motion
