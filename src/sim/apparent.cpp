#include "clickwise/sim/apparent.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "apparent_fit.hpp"
#include "apparent_lag.hpp"
#include "clickwise/core/units.hpp"
#include "fade.hpp"

namespace clickwise::sim {

namespace {

constexpr double gravity = core::standard_gravity_m_s2;
constexpr double normal_95 = 1.6448536269514722;
constexpr double least_riding_s = 10.0;
constexpr double follows_share = 0.5;  // of the measured force's variance, explained
// What smoothing of the travel and straight lines between points leave, one deviation: measured on
// invented rides (docs/method/ride-alone.md, A5).
constexpr double shape_share = 0.012, shape_n = 2.0;
constexpr double first_stretch_share = 0.15;
constexpr double rest_tolerance = 0.3;  // of g, of the long mean: leaning axis, zero, gain

constexpr const char* too_little =
    "too little riding with a usable accelerometer for a damper's curve";

void require_sizes(const SprungRide& ride) {
  const std::size_t n = ride.travel_m.size();
  if (ride.velocity_m_s.size() != n || ride.felt_m_s2.size() != n || ride.counted.size() != n)
    throw std::invalid_argument("apparent_damper: series of different sizes");
}

// A ride begins and ends at about the same vertical speed: the long mean is 1 g.
double mean_felt(const SprungRide& ride) {
  double sum = 0.0, count = 0.0;
  for (std::size_t i = 0; i < ride.counted.size(); ++i) {
    if (ride.counted[i] == 0 || !std::isfinite(ride.felt_m_s2[i])) continue;
    sum += ride.felt_m_s2[i];
    count += 1.0;
  }
  return count * ride.interval_s >= least_riding_s ? sum / count : NAN;
}

bool near(double value, double wanted) {
  return std::abs(value / wanted - 1.0) <= rest_tolerance;
}

// What the long mean says is wrong with the channel; empty when nothing.
std::string wrong_reading(double mean_m_s2) {
  if (!std::isfinite(mean_m_s2))
    return "the accelerometer's channel has too few usable readings; check its plug and its column";
  const double mean_g = mean_m_s2 / gravity;
  const double size = std::abs(mean_g);
  if (near(mean_g, 1.0)) return "";
  const char* other_sign = mean_g < 0.0 ? ", and up has the other sign" : "";
  if (near(size, gravity))
    return fmt::format(
        "the long mean of the accelerometer is {:.1f} g in place of 1 g: it is "
        "logged in m/s2; write unit = \"m/s2\"{}",
        mean_g, other_sign);
  if (near(size, 1.0 / gravity))
    return fmt::format(
        "the long mean of the accelerometer is {:.2f} g in place of 1 g: it is "
        "logged in g; write unit = \"g\"{}",
        mean_g, other_sign);
  if (near(mean_g, -1.0))
    return fmt::format(
        "the long mean of the accelerometer is {:.2f} g in place of 1 g: its axis "
        "points down; write up with the other sign",
        mean_g);
  return fmt::format(
      "the long mean of the accelerometer is {:.2f} g in place of 1 g: its axis "
      "does not lie along the wheel's travel, or its scale is wrong; check the "
      "column, the unit and the mounting",
      mean_g);
}

Bounded bounded(double value, double deviation, double degrees) {
  const double half = student_quantile(normal_95, std::max(3.0, degrees)) * deviation;
  return {value, value - half, value + half};
}

// Deviation of theta_i / share, by the first order.
double ratio_deviation(const ApparentFit& fit, Eigen::Index i) {
  const double share = fit.theta[share_index];
  const double ratio = fit.theta[i] / share;
  const double variance = fit.covariance(i, i) - 2.0 * ratio * fit.covariance(i, share_index) +
                          ratio * ratio * fit.covariance(share_index, share_index);
  return std::sqrt(std::max(0.0, variance)) / share;
}

std::vector<ApparentPoint> points(const ApparentEnd& end, const ApparentFit& fit,
                                  const Knots& knots, std::size_t d) {
  std::vector<ApparentPoint> all;
  const auto offset =
      first_knot_index + static_cast<Eigen::Index>(d == 0 ? 0 : knots.speed_m_s[0].size());
  for (std::size_t k = 0; k < knots.speed_m_s[d].size(); ++k) {
    ApparentPoint point;
    point.speed_m_s = knots.speed_m_s[d][k];
    point.seconds = knots.seconds[d][k];
    const Eigen::Index i = offset + static_cast<Eigen::Index>(k);
    const double force = fit.theta[i] / fit.theta[share_index];
    if (end.curve) {
      const auto& law = d == 0 ? end.curve->compression : end.curve->rebound;
      point.bike_file_n = law.force_n(point.speed_m_s);
    }
    const double shape = shape_n + shape_share * std::abs(force);
    point.force_n =
        bounded(force, std::hypot(ratio_deviation(fit, i), shape), knots.blocks[d][k] - 1.0);
    all.push_back(point);
  }
  return all;
}

// What the first stretch, if it does not quite go with v^2, may take from the friction: a
// deviation.
double first_stretch_n(const ApparentDamper& damper) {
  double sum = 0.0;
  for (const auto* points : {&damper.compression, &damper.rebound})
    if (!points->empty()) sum += std::abs(points->front().force_n.value);
  return first_stretch_share * 0.5 * sum;
}

// The measured acceleration beside what the bike file's model and the apparent damper say of it.
void compare_accelerations(const ApparentEnd& end, const SprungRide& ride,
                           std::span<const double> felt, const ApparentSamples& samples,
                           const Knots& knots, const ApparentFit& fit, ApparentDamper& result) {
  double rows = 0.0, sum = 0.0, squares = 0.0, model = 0.0, apparent = 0.0;
  each_row(ride, felt, samples, knots, [&](const ApparentRow& row) {
    const double measured = row.load_n * row.felt_per_n;
    const double said_n = row.held_n + row.damper_n + end.friction_n * row.sign;
    rows += 1.0;
    sum += measured;
    squares += measured * measured;
    model += std::pow((row.load_n - said_n) * row.felt_per_n, 2);
    apparent += std::pow(fit.residual_n(row) * row.felt_per_n, 2);
  });
  const double mean = sum / rows;
  result.felt_rms_m_s2 = std::sqrt(std::max(0.0, squares / rows - mean * mean));
  if (end.curve) result.model_rms_m_s2 = std::sqrt(model / rows);
  result.apparent_rms_m_s2 = std::sqrt(apparent / rows);
}

double used_seconds(const SprungRide& ride, const ApparentSamples& samples) {
  double seconds = 0.0;
  for (const std::uint8_t one : samples.usable) seconds += one * ride.interval_s;
  return seconds;
}

// The fit with the spring's share free where the ride tells it, else at 1.
ApparentFit fit_share(const SprungRide& ride, std::span<const double> felt,
                      const ApparentSamples& samples, const Knots& knots,
                      const ApparentOptions& options, ApparentDamper& result) {
  ApparentFit fit = fit_apparent(ride, felt, samples, knots, true);
  if (fit.rows == 0) return fit;
  result.spring_share =
      bounded(fit.theta[share_index], std::sqrt(fit.covariance(share_index, share_index)),
              samples.blocks - 1.0);
  const double half = result.spring_share.high - result.spring_share.value;
  result.spring_share_told = half <= options.spring_told && result.spring_share.value > 0.5 &&
                             result.spring_share.value < 2.0;
  if (!result.spring_share_told) fit = fit_apparent(ride, felt, samples, knots, false);
  return fit;
}

}  // namespace

std::optional<ApparentEnd> ApparentEnd::from(const bike::Bike& bike, bike::EndName name,
                                             const std::optional<damper::Curve>& curve) {
  const auto& end = bike.end(name);
  const auto sprung_kg = bike.sprung_mass_kg(name);
  if (!end || !end->spring || !sprung_kg) return std::nullopt;
  return ApparentEnd{*sprung_kg, end->stroke_m, end->friction_n, end->ratio, *end->spring, curve};
}

ApparentDamper apparent_damper(const ApparentEnd& end, const SprungRide& ride,
                               const ApparentOptions& options) {
  require_sizes(ride);
  ApparentDamper result;
  result.mean_felt_m_s2 = mean_felt(ride);
  result.problem = wrong_reading(result.mean_felt_m_s2);
  if (!result.problem.empty()) return result;
  const ApparentSamples samples = prepare(end, ride, options);
  const Knots knots = choose_knots(end, ride, samples, options);
  result.used_s = used_seconds(ride, samples);
  if (knots.speed_m_s[0].empty() || knots.speed_m_s[1].empty()) {
    result.problem = too_little;
    return result;
  }
  const Realigned felt = realign(ride, samples, knots, options);
  result.lag_s = felt.lag_s;
  const ApparentFit fit = fit_share(ride, felt.felt_m_s2, samples, knots, options, result);
  if (fit.rows == 0 || result.used_s < least_riding_s) {
    result.problem = too_little;
    return result;
  }
  if (1.0 - std::pow(fit.rms_n / fit.load_rms_n, 2) < follows_share) {
    result.problem =
        "the accelerometer does not follow the suspension; check that it sits on the sprung side "
        "of this end, its column, and the spring and masses in the bike file";
    return result;
  }
  result.offset_n = fit.theta[offset_index];
  result.compression = points(end, fit, knots, 0);
  result.rebound = points(end, fit, knots, 1);
  result.friction_n =
      bounded(fit.theta[friction_index] / fit.theta[share_index],
              std::hypot(ratio_deviation(fit, friction_index), first_stretch_n(result)),
              samples.blocks - 1.0);
  compare_accelerations(end, ride, felt.felt_m_s2, samples, knots, fit, result);
  result.fade = find_fade(ride, felt.felt_m_s2, samples, knots, fit, options);
  return result;
}

}  // namespace clickwise::sim
