// Invented rides of one end with known truth, each with other clicks over the same ground, and the
// noisy log that the prediction is made from.
#pragma once

#include <cmath>
#include <string>
#include <vector>

#include "clickwise/bike/spring.hpp"
#include "clickwise/core/statistics.hpp"
#include "clickwise/damper/damper.hpp"
#include "clickwise/signal/smoother.hpp"
#include "clickwise/sim/ground.hpp"
#include "clickwise/sim/random.hpp"
#include "clickwise/sim/ride.hpp"
#include "clickwise/sim/speed_plan.hpp"
#include "clickwise/sim/vehicle.hpp"

namespace clickwise::replay_rides {

inline bike::HydraulicSide side(bike::Clicks bleed, bike::Clicks valve, double slope, double port) {
  bike::HydraulicSide side;
  side.bleed = bleed;
  side.valve = valve;
  side.slope_n_s_m = slope;
  side.port_n_s2_m2 = port;
  return side;
}

inline bike::HydraulicDamper fork_damper() {
  return {side({0.012, 0.190, 16, 8}, {620.0, 140.0, 12, 6}, 180.0, 22.0),
          side({0.025, 0.320, 18, 9}, {300.0, 60.0, 10, 5}, 520.0, 30.0)};
}

inline bike::HydraulicDamper shock_damper() {
  return {side({0.006, 0.090, 16, 8}, {1700.0, 400.0, 12, 6}, 900.0, 150.0),
          side({0.010, 0.130, 18, 9}, {700.0, 150.0, 10, 5}, 3200.0, 250.0)};
}

// An end whose parts can be changed one by one.
struct Parts {
  bike::End end;  // stroke, ratio, spring, friction, tyre
  double sprung_kg = 0.0;
  double unsprung_kg = 0.0;
  bike::HydraulicDamper damper;

  sim::VehicleEnd vehicle() const {
    const damper::Damper built(damper);
    return {.sprung_mass_kg = sprung_kg,
            .unsprung_mass_kg = unsprung_kg,
            .stroke_m = end.stroke_m,
            .friction_n = end.friction_n,
            .tyre = *end.tyre,
            .curve = built.curve(),
            .stop = {},
            .table = sim::WheelTable(end.stroke_m, end.ratio, [this](double x) {
              return bike::spring_force_n(*end.spring, x, end.stroke_m);
            })};
  }
};

inline Parts fork() {
  Parts parts;
  parts.end.stroke_m = 0.170;
  parts.end.friction_n = 15.0;
  parts.end.tyre = bike::Tyre{90e3, 150.0};
  parts.end.spring = bike::Spring{
      bike::TableSpring{core::Polyline({0.0, 0.040, 0.120, 0.170}, {90.0, 300.0, 760.0, 1500.0})},
      bike::Bumper{0.012, 2500.0}};
  parts.sprung_kg = 36.0;
  parts.unsprung_kg = 2.9;
  parts.damper = fork_damper();
  return parts;
}

inline Parts shock() {
  Parts parts;
  parts.end.stroke_m = 0.065;
  parts.end.friction_n = 30.0;
  parts.end.tyre = bike::Tyre{100e3, 180.0};
  parts.end.ratio = core::Polyline({0.0, 0.065}, {3.0, 2.4});
  parts.end.spring = bike::Spring{bike::CoilSpring{84e3, 0.001}, bike::Bumper{0.010, 4000.0}};
  parts.end.bottom_out_within_m = 2e-3;
  parts.sprung_kg = 51.0;
  parts.unsprung_kg = 4.2;
  parts.damper = shock_damper();
  return parts;
}

// What a ride goes over, how fast, and on what.
struct Course {
  std::string name;
  bool rear = false;
  double pace = 1.0;
  sim::GroundPlan ground;
  double length_m = 0.0;
  std::uint64_t seed = 1;
};

inline sim::SpeedPlan steady(double speed_m_s, double pace, double seconds) {
  sim::SpeedPlan plan;
  plan.over_time = true;
  std::vector<double> t, v;
  for (int i = 0; i <= 12; ++i) {
    t.push_back(seconds * i / 12.0);
    v.push_back(speed_m_s * (1.0 + 0.3 * std::sin(1.7 * i)));
  }
  plan.speed_m_s = core::Polyline(t, v);
  plan.pace = pace;
  plan.duration_s = seconds;
  return plan;
}

// The kinds of ground, by number.
inline sim::GroundPlan ground_of(int kind, std::uint64_t seed, double length_m) {
  sim::GroundPlan plan;
  plan.seed = seed;
  sim::Random random(seed, 77);
  const auto along = [&](double step_m, auto&& place) {
    for (double at = 15.0; at < length_m; at += step_m * (0.6 + 0.8 * random.uniform())) place(at);
  };
  const double size = 0.8 + 0.4 * random.uniform();
  switch (kind) {
    case 0:  // rough all along
      plan.roughness_m3 = 180e-6 * size;
      break;
    case 1:  // rock gardens
      plan.roughness_m3 = 40e-6;
      along(45.0, [&](double at) {
        plan.features.push_back(sim::RockGarden{at, 25.0, 1.2, 0.09 * size});
      });
      break;
    case 2:  // kickers and drops, smooth between
      plan.roughness_m3 = 30e-6;
      along(35.0, [&](double at) {
        plan.features.push_back(sim::Kicker{at, 0.45 * size, 2.8, 0.3});
        plan.features.push_back(sim::RockGarden{at + 14.0, 8.0, 1.0, 0.06});
      });
      break;
    case 3:  // drops and hollows: bottoming
      plan.roughness_m3 = 60e-6;
      along(30.0, [&](double at) {
        plan.features.push_back(sim::Drop{at, 0.5 * size});
        plan.features.push_back(sim::Compression{at + 12.0, 0.5 * size, 7.0});
      });
      break;
    case 4:  // roots and rough
      plan.roughness_m3 = 70e-6 * size;
      along(20.0, [&](double at) {
        plan.features.push_back(sim::Roots{at, 0.06 * size, 0.16, 0.9, 9});
      });
      break;
    default:  // a bit of everything
      plan.roughness_m3 = 90e-6;
      along(60.0, [&](double at) {
        plan.features.push_back(sim::RockGarden{at, 15.0, 1.0, 0.08 * size});
        plan.features.push_back(sim::Kicker{at + 22.0, 0.35 * size, 2.5, 0.2});
        plan.features.push_back(sim::Roots{at + 38.0, 0.05, 0.15, 0.8, 6});
        plan.features.push_back(sim::Compression{at + 46.0, 0.35, 6.0});
      });
  }
  return plan;
}

inline constexpr double speed_of_kind[] = {7.5, 6.5, 8.0, 7.0, 6.5, 7.5};
inline constexpr const char* name_of_kind[] = {"rough", "rocks", "kickers",
                                               "drops", "roots", "mixed"};

struct Ride {
  std::string name;
  Parts parts;
  sim::WheelPath path;
  sim::Progress progress;

  sim::EndTruth truth(const Parts& with, double step_s = 1e-4) const {
    return sim::ride_end(
        with.vehicle(), path, progress,
        {.rate_hz = 1000.0, .step_s = step_s, .bottom_out_within_m = with.end.bottom_out_within_m});
  }
};

// Ride `number` of a set: kinds, ends and paces in turn, seeded.
inline Ride ride_number(int number, std::uint64_t set_seed, double seconds) {
  const int kind = number % 6;
  const bool rear = (number / 6 + kind) % 2 == 1;
  const double pace = (number / 3) % 2 == 0 ? 1.0 : 0.75;
  const double speed = speed_of_kind[kind];
  const auto plan = steady(speed, pace, seconds);
  const auto progress = sim::progress(plan, 1000.0);
  const double length = progress.distance_m.back();
  const auto seed = set_seed * 1000 + static_cast<std::uint64_t>(number);
  const auto path = sim::rolled(sim::lay_ground(ground_of(kind, seed, length), length), {});
  return {std::string(name_of_kind[kind]) + (rear ? " shock" : " fork") +
              (pace < 1.0 ? " slow" : " fast"),
          rear ? shock() : fork(), path, progress};
}

// The log of a 12-bit converter over the stroke at 1 kHz with 0.6 counts of noise, smoothed.
struct Log {
  std::vector<double> travel_m;
  std::vector<double> velocity_m_s;
  double velocity_noise_m_s = 0.0;
};

inline Log log_of(const sim::EndTruth& truth, double stroke_m, std::uint64_t seed) {
  constexpr double counts = 3640.0;
  sim::Random random(seed, 5);
  std::vector<double> reading;
  for (const double x : truth.travel_m) {
    const double count = 210.0 + x / stroke_m * counts + 0.6 * random.normal();
    reading.push_back((std::clamp(std::round(count), 0.0, 4095.0) - 210.0) * stroke_m / counts);
  }
  const auto model = signal::fit_smoother({std::span<const double>(reading)}, 1000.0);
  auto smoothed = signal::smooth(reading, model);
  return {smoothed.position_m, smoothed.velocity_m_s, model.rest_velocity_noise_m_s};
}

// Figures of one end by their plain definitions, over samples from `first` on.
struct Figures {
  double high_share[2] = {0, 0};  // compression, rebound; of all time
  double p95_m_s[2] = {0, 0};
  double high_j[2] = {0, 0};
  double mean_m = 0.0;
  double p95_m = 0.0;
  double bottom_outs = 0.0;
};

inline Figures figures(const std::vector<double>& x, const std::vector<double>& v,
                       const sim::VehicleEnd& end, double split_m_s, std::size_t first,
                       double within_m) {
  Figures f;
  std::vector<double> speed[2], travel;
  bool armed = true;
  for (std::size_t i = first; i < x.size(); ++i) {
    const int d = v[i] >= 0.0 ? 0 : 1;
    const double s = std::abs(v[i]);
    speed[d].push_back(s);
    travel.push_back(x[i]);
    f.mean_m += x[i];
    if (s > split_m_s) {
      f.high_share[d] += 1.0;
      f.high_j[d] += std::abs(end.curve.force_n(v[i])) * s * 1e-3;
    }
    if (armed && x[i] >= end.stroke_m - within_m) {
      f.bottom_outs += 1.0;
      armed = false;
    }
    if (x[i] < end.stroke_m - std::max(4.0 * within_m, 0.015)) armed = true;
  }
  const double n = static_cast<double>(travel.size());
  for (int d = 0; d < 2; ++d) {
    f.high_share[d] /= n;
    f.p95_m_s[d] = core::quantile(speed[d], 0.95);
  }
  f.mean_m /= n;
  f.p95_m = core::quantile(travel, 0.95);
  return f;
}

}  // namespace clickwise::replay_rides
