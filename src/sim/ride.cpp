#include "clickwise/sim/ride.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/parallel.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/scene.hpp"

namespace clickwise::sim {

namespace {

constexpr double default_wheelbase_m = 1.2;  // common practice, no source
constexpr double least_truth_rate_hz = 1000.0;

// The contract's bottom-out, step by step.
class BottomOutWatch {
public:
  BottomOutWatch(double stroke_m, double within_m)
      : line_m_(stroke_m - within_m), rearm_m_(stroke_m - std::max(4.0 * within_m, 0.015)) {}

  void see(double t_s, double travel_m, double velocity_m_s) {
    if (armed_ && travel_m >= line_m_) {
      found_.push_back({.t_s = t_s, .depth_m = travel_m, .closing_speed_m_s = velocity_m_s});
      armed_ = false;
    }
    if (armed_) return;
    found_.back().depth_m = std::max(found_.back().depth_m, travel_m);
    armed_ = travel_m < rearm_m_;
  }

  std::vector<run::EndStop> found() && { return std::move(found_); }

private:
  double line_m_;
  double rearm_m_;
  bool armed_ = true;
  std::vector<run::EndStop> found_;
};

EndTruth empty_truth(std::size_t samples) {
  EndTruth truth;
  for (auto* series : {&truth.travel_m, &truth.velocity_m_s, &truth.tyre_n, &truth.damper_n,
                       &truth.felt_m_s2, &truth.ground_m, &truth.sprung_m, &truth.sprung_m_s})
    series->assign(samples, NAN);
  truth.airborne.assign(samples, 0);
  return truth;
}

void record(EndTruth& truth, std::size_t i, const EndOutput& output, const EndState& state,
            double ground_m) {
  truth.sprung_m[i] = state.sprung_m;
  truth.sprung_m_s[i] = state.sprung_m_s;
  truth.travel_m[i] = output.travel_m;
  truth.velocity_m_s[i] = output.velocity_m_s;
  truth.tyre_n[i] = output.tyre_n;
  truth.damper_n[i] = output.damper_n;
  truth.felt_m_s2[i] = output.felt_m_s2;
  truth.ground_m[i] = ground_m;
  truth.airborne[i] = output.tyre_n <= 0.0;
}

// The accelerations of a sample are the changes of velocity from the middle of the interval before
// it to the middle of the one behind it.
class Felt {
public:
  Felt(EndTruth& truth, std::size_t samples, double rate_hz) : truth_(truth), rate_hz_(rate_hz) {
    truth_.sprung_specific_m_s2.assign(samples, core::standard_gravity_m_s2);
    truth_.shaft_m_s2.assign(samples, 0.0);
  }

  void between(double shaft_m_s, double sprung_m_s) {
    if (next_ > 0) {
      truth_.shaft_m_s2[next_] = (shaft_m_s - shaft_m_s_) * rate_hz_;
      truth_.sprung_specific_m_s2[next_] += (sprung_m_s - sprung_m_s_) * rate_hz_;
    }
    shaft_m_s_ = shaft_m_s;
    sprung_m_s_ = sprung_m_s;
    ++next_;
  }

private:
  EndTruth& truth_;
  double rate_hz_;
  std::size_t next_ = 0;
  double shaft_m_s_ = 0.0;
  double sprung_m_s_ = 0.0;
};

double sprung_energy_j(const VehicleEnd& end, double velocity_m_s) {
  return 0.5 * end.sprung_mass_kg * velocity_m_s * velocity_m_s;
}

}  // namespace

EndTruth ride_end(const VehicleEnd& end, const WheelPath& path, const Progress& progress,
                  const EndRide& ride) {
  const std::size_t samples = progress.distance_m.size();
  EndTruth truth = empty_truth(samples);
  if (samples == 0) return truth;
  BottomOutWatch watch(end.stroke_m, ride.bottom_out_within_m);
  const auto steps = static_cast<std::size_t>(std::ceil(1.0 / (ride.rate_hz * ride.step_s) - 1e-9));
  const double step_s = 1.0 / (ride.rate_hz * static_cast<double>(steps));
  const double start_m = progress.distance_m[0] - ride.behind_m;
  const std::size_t middle = std::max<std::size_t>(1, steps / 2);
  Felt felt(truth, samples, ride.rate_hz);
  EndState state = at_rest(end, path.height_m(start_m));
  EndOutput output = step(end, state, path.at(start_m, 0.0), step_s);
  for (std::size_t i = 0; i < samples; ++i) {
    const double from_m = progress.distance_m[i] - ride.behind_m;
    record(truth, i, output, state, path.height_m(from_m));
    if (i + 1 == samples) break;
    const double advance_m = progress.distance_m[i + 1] - progress.distance_m[i];
    const double speed_m_s = advance_m * ride.rate_hz;
    for (std::size_t k = 1; k <= steps; ++k) {
      const double part = static_cast<double>(k) / static_cast<double>(steps);
      output = step(end, state, path.at(from_m + part * advance_m, speed_m_s), step_s);
      if (k == middle) felt.between(output.velocity_m_s, state.sprung_m_s);
      const double t_s = (static_cast<double>(i) + part) / ride.rate_hz;
      watch.see(t_s, output.travel_m, output.velocity_m_s);
    }
  }
  truth.bottom_outs = std::move(watch).found();
  for (auto& stop : truth.bottom_outs)
    stop.energy_left_j = sprung_energy_j(end, stop.closing_speed_m_s);
  return truth;
}

Truth simulate(const Scene& scene) {
  Truth truth;
  const double multiple = std::ceil(least_truth_rate_hz / scene.logger.rate_hz - 1e-9);
  truth.rate_hz = scene.logger.rate_hz * std::max(1.0, multiple);
  truth.progress = progress(scene.speed, truth.rate_hz);
  const double length_m = truth.progress.distance_m.empty() ? 0 : truth.progress.distance_m.back();
  const WheelPath path = rolled(lay_ground(scene.ground, length_m), scene.rolling);
  core::parallel_for(bike::both_ends.size(), [&](std::size_t i) {
    const bike::EndName name = bike::both_ends[i];
    const auto& end = scene.bike.end(name);
    if (!end) return;
    const bool rear = name == bike::EndName::rear;
    const EndRide ride{
        .rate_hz = truth.rate_hz,
        .step_s = scene.step_s,
        .behind_m = rear ? scene.bike.wheelbase_m.value_or(default_wheelbase_m) : 0.0,
        .bottom_out_within_m = end->bottom_out_within_m};
    auto& into = rear ? truth.rear : truth.front;
    into = ride_end(VehicleEnd::from(scene.bike, name), path, truth.progress, ride);
  });
  return truth;
}

}  // namespace clickwise::sim
