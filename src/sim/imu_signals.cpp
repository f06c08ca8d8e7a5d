#include "imu_signals.hpp"

#include <Eigen/Geometry>
#include <cmath>
#include <numbers>

#include "clickwise/core/rigid_body.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/random.hpp"

namespace clickwise::sim {

namespace {

using Eigen::Vector3d;

constexpr double default_wheelbase_m = 1.2;
constexpr std::uint64_t sway_stream = 3;
constexpr std::uint64_t first_mounting_stream = 4;

// Slow roll and yaw of a ridden bike: three sinusoids each, fading out below walking pace.
// Common practice, no source: some 20 degrees a second.
class Sway {
public:
  explicit Sway(std::uint64_t seed) {
    Random chance(seed, sway_stream);
    for (auto& part : parts_)
      part = {0.25 * (0.5 + chance.uniform()),
              2.0 * std::numbers::pi * (0.3 + 0.6 * chance.uniform()),
              2.0 * std::numbers::pi * chance.uniform()};
  }

  double rate_rad_s(std::size_t which, double t_s) const {
    double sum = 0.0;
    for (std::size_t k = 0; k < 3; ++k) {
      const Part& part = parts_[3 * which + k];
      sum += part.amplitude * std::sin(part.pulsation * t_s + part.phase);
    }
    return sum;
  }

private:
  struct Part {
    double amplitude, pulsation, phase;
  };
  std::array<Part, 6> parts_;
};

struct Frame {
  Vector3d along;  // up the shaft
  Vector3d forward;
  Vector3d lateral;  // the bike's nose rises with a positive turn about -lateral
};

Frame frame_of(const Vector3d& along) {
  const Vector3d other = std::abs(along.x()) < 0.8 ? Vector3d::UnitX() : Vector3d::UnitY();
  Frame frame;
  frame.along = along;
  frame.lateral = along.cross(other).normalized();
  frame.forward = frame.lateral.cross(along);
  return frame;
}

// The same where the bearing of a link gives the lateral direction.
Frame frame_across(const Vector3d& lateral) {
  const Vector3d along = frame_of(lateral).forward;
  return {along, lateral.cross(along), lateral};
}

// The bike's attitude and turning at one sample, in scalars.
struct BodyMotion {
  double pitch_rad, pitch_rad_s, pitch_rad_s2, roll_rad_s, yaw_rad_s, forward_m_s2;
};

class Body {
public:
  Body(const bike::Bike& bike, std::uint64_t seed, const Truth& truth)
      : truth_(truth), sway_(seed), wheelbase_m_(bike.wheelbase_m.value_or(default_wheelbase_m)) {}

  BodyMotion at(std::size_t i) const {
    const auto& speed = truth_.progress.speed_m_s;
    const std::size_t before = i > 0 ? i - 1 : i;
    const std::size_t after = i + 1 < speed.size() ? i + 1 : i;
    const double span_s = static_cast<double>(after - before) / truth_.rate_hz;
    const double fade = std::min(1.0, speed[i] / 1.5);
    const double t_s = static_cast<double>(i) / truth_.rate_hz;
    return {difference(&EndTruth::sprung_m, i),
            difference(&EndTruth::sprung_m_s, i),
            difference(&EndTruth::sprung_specific_m_s2, i) -
                (both() ? 0.0
                        : (truth_.front ? 1.0 : -1.0) * core::standard_gravity_m_s2 / wheelbase_m_),
            fade * sway_.rate_rad_s(0, t_s),
            fade * sway_.rate_rad_s(1, t_s),
            span_s > 0.0 ? (speed[after] - speed[before]) / span_s : 0.0};
  }

private:
  bool both() const { return truth_.front && truth_.rear; }

  double difference(std::vector<double> EndTruth::*series, std::size_t i) const {
    const double front = truth_.front ? ((*truth_.front).*series)[i] : 0.0;
    const double rear = truth_.rear ? ((*truth_.rear).*series)[i] : 0.0;
    return (front - rear) / wheelbase_m_;
  }

  const Truth& truth_;
  Sway sway_;
  double wheelbase_m_;
};

core::Turning turning_of(const BodyMotion& body, const Frame& frame) {
  return {-body.pitch_rad_s * frame.lateral + body.roll_rad_s * frame.forward +
              body.yaw_rad_s * frame.along,
          -body.pitch_rad_s2 * frame.lateral};
}

Vector3d sprung_force(const EndTruth& end, std::size_t i, const BodyMotion& body,
                      const Frame& frame) {
  return end.sprung_specific_m_s2[i] * frame.along +
         (core::standard_gravity_m_s2 * std::sin(body.pitch_rad) + body.forward_m_s2) *
             frame.forward;
}

Eigen::Matrix3d mounting(std::uint64_t seed, std::uint64_t unit, double degrees) {
  Random chance(seed, first_mounting_stream + unit);
  const Vector3d about(chance.normal(), chance.normal(), chance.normal());
  return Eigen::AngleAxisd(degrees * core::radians_per_degree, about.normalized())
      .toRotationMatrix();
}

void turn(ImuSignals& signals, const Eigen::Matrix3d& rotation) {
  for (auto* series : {&signals.accel_m_s2, &signals.gyro_rad_s})
    for (Vector3d& value : *series) value = rotation * value;
}

void slide(const EndTruth& end, const bike::ImuPair& pair, const Body& body, ImuPairSignals& out) {
  const Frame frame = frame_of(Vector3d(pair.axis.data()));
  for (std::size_t i = 0; i < end.travel_m.size(); ++i) {
    const BodyMotion now = body.at(i);
    const core::Turning turning = turning_of(now, frame);
    const Vector3d upper = sprung_force(end, i, now, frame);
    const Vector3d below = -(pair.spacing_m - end.travel_m[i]) * frame.along;
    out.upper.accel_m_s2.push_back(upper);
    out.lower.accel_m_s2.push_back(upper + core::transport(turning, below,
                                                           end.velocity_m_s[i] * frame.along,
                                                           end.shaft_m_s2[i] * frame.along));
    out.upper.gyro_rad_s.push_back(turning.rate);
    out.lower.gyro_rad_s.push_back(turning.rate);
  }
}

void swing(const EndTruth& end, const bike::End& parts, const Body& body, ImuPairSignals& out) {
  const bike::ImuPair& pair = *parts.imu;
  const Vector3d axis(pair.axis.data());
  const Frame frame = frame_across(axis);
  const core::Polyline angle_of(pair.swing_m->y(), pair.swing_m->x());
  const double extended = parts.ratio.integral(0.0);
  for (std::size_t i = 0; i < end.travel_m.size(); ++i) {
    const BodyMotion now = body.at(i);
    const double x = end.travel_m[i];
    const double angle = angle_of(parts.ratio.integral(x) - extended);
    const double rate = end.velocity_m_s[i] * parts.ratio(x) / pair.swing_m->slope(angle);
    const Vector3d turn_rate = turning_of(now, frame).rate;
    const Vector3d force = sprung_force(end, i, now, frame);
    out.upper.accel_m_s2.push_back(force);
    out.lower.accel_m_s2.push_back(force);
    out.upper.gyro_rad_s.push_back(turn_rate);
    out.lower.gyro_rad_s.push_back(turn_rate + rate * axis);
  }
}

}  // namespace

ImuPairSignals imu_signals(const bike::Bike& bike, bike::EndName name, const ImuPlan& plan,
                           std::uint64_t seed, const Truth& truth) {
  const bike::End& end = *bike.end(name);
  const Body body(bike, seed, truth);
  ImuPairSignals signals;
  if (end.imu->swinging())
    swing(*truth.end(name), end, body, signals);
  else
    slide(*truth.end(name), *end.imu, body, signals);
  const std::uint64_t first = name == bike::EndName::front ? 0 : 2;
  turn(signals.upper, mounting(seed, first, plan.mounting_deg));
  turn(signals.lower, mounting(seed, first + 1, plan.mounting_deg));
  return signals;
}

ImuSignals bar_signals(const bike::Bike& bike, std::uint64_t seed, const Truth& truth) {
  const EndTruth& end = truth.front ? *truth.front : *truth.rear;
  const Body body(bike, seed, truth);
  const Frame frame = frame_of(Vector3d::UnitZ());
  ImuSignals signals;
  for (std::size_t i = 0; i < end.travel_m.size(); ++i)
    signals.accel_m_s2.push_back(sprung_force(end, i, body.at(i), frame));
  return signals;
}

}  // namespace clickwise::sim
