#include "clickwise/advice/end_ride.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::advice {

namespace {

constexpr double cell_m_s = 0.005;

// Sums of speed and time by cell, turned into a density at the end.
class Cells {
public:
  void add(double speed_m_s, double seconds) {
    const auto cell = static_cast<std::size_t>(std::min(speed_m_s / cell_m_s, 1e5));
    if (cell >= seconds_.size()) {
      seconds_.resize(cell + 1, 0.0);
      distance_.resize(cell + 1, 0.0);
    }
    seconds_[cell] += seconds;
    distance_[cell] += seconds * speed_m_s;
  }

  core::Density density() const {
    core::Density result;
    for (std::size_t i = 0; i < seconds_.size(); ++i) {
      if (seconds_[i] <= 0.0) continue;
      result.at.push_back(distance_[i] / seconds_[i]);
      result.weight.push_back(seconds_[i]);
    }
    return result;
  }

private:
  std::vector<double> seconds_;
  std::vector<double> distance_;
};

}  // namespace

std::vector<run::EndStop> top_outs_on_the_ground(const EndRide& ride) {
  constexpr double take_off_s = 0.15;  // an end extends ahead of the moment both are long
  std::vector<run::EndStop> kept;
  for (const run::EndStop& stop : *ride.top_outs) {
    const auto in_the_air = [&](const run::Airtime& air) {
      return stop.t_s > air.begin_s - take_off_s && stop.t_s < air.end_s;
    };
    if (!ride.airtimes || std::none_of(ride.airtimes->begin(), ride.airtimes->end(), in_the_air))
      kept.push_back(stop);
  }
  return kept;
}

damper::RideDensity ride_density(const EndRide& ride) {
  const run::TimeBase& time = ride.motion->time;
  return ride_density(ride, {{time.at(0), time.at(time.samples)}});
}

damper::RideDensity ride_density(const EndRide& ride, const std::vector<Window>& windows) {
  const run::TimeBase& time = ride.motion->time;
  const auto index = [&](double t_s) {
    const double i = std::ceil((t_s - time.start_s) * time.rate_hz - 1e-9);
    return static_cast<std::size_t>(std::clamp(i, 0.0, static_cast<double>(time.samples)));
  };
  Cells compression;
  Cells rebound;
  for (const Window& window : windows) {
    for (std::size_t i = index(window.begin_s); i < index(window.end_s); ++i) {
      if (!(*ride.counted)[i]) continue;
      const double velocity_m_s = ride.motion->velocity_m_s[i];
      (run::is_compression(velocity_m_s) ? compression : rebound)
          .add(std::abs(velocity_m_s), time.interval_s());
    }
  }
  return {compression.density(), rebound.density()};
}

}  // namespace clickwise::advice
