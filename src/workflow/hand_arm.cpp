#include "clickwise/signal/hand_arm.hpp"

#include <cmath>

#include "end_motion.hpp"

namespace clickwise::workflow {

namespace {

std::vector<std::uint8_t> ridden(const Ride& ride) {
  std::vector<std::uint8_t> mask = ride.ends.front().counted;
  for (const RideEnd& end : ride.ends)
    for (std::size_t i = 0; i < mask.size(); ++i) mask[i] |= end.counted[i];
  return mask;
}

std::vector<std::span<const double>> known_stretches(const std::vector<double>& series,
                                                     const std::vector<std::uint8_t>& mask) {
  std::vector<std::span<const double>> stretches;
  std::size_t begin = 0;
  for (std::size_t i = 0; i <= series.size(); ++i) {
    if (i < series.size() && mask[i] && std::isfinite(series[i])) continue;
    if (i > begin) stretches.push_back(std::span(series).subspan(begin, i - begin));
    begin = i + 1;
  }
  return stretches;
}

}  // namespace

HandArm hand_arm(const Ride& ride, const run::Recording& units, std::size_t first_channel,
                 const motion::UniformClock& clock) {
  const std::vector<std::uint8_t> mask = ridden(ride);
  double square = 0.0;
  for (std::size_t axis = 0; axis < 3; ++axis) {
    std::vector<double> series = motion::on_base(units, first_channel + axis, clock);
    for (double& one : series) one *= ride.bike.hand_accel->metres_per_second2_per_unit;
    const double rms = signal::hand_arm_rms_m_s2(known_stretches(series, mask), clock.base.rate_hz);
    square += rms * rms;
  }
  const double total = std::sqrt(square);
  return {total, signal::daily_exposure_m_s2(total, ride.log.riding_s), clock.base.rate_hz};
}

}  // namespace clickwise::workflow
