#include "clickwise/sim/truth_figures.hpp"

#include <algorithm>
#include <cmath>

#include "clickwise/core/statistics.hpp"
#include "clickwise/run/motion.hpp"

namespace clickwise::sim {

namespace {

constexpr double longest_stop_s = 5.0;

struct Window {
  std::size_t begin;
  std::size_t end;
};

Window riding(const Truth& truth) {
  const double all_s = static_cast<double>(truth.samples()) / truth.rate_hz;
  const auto& progress = truth.progress;
  const double begin_s = progress.ride_begin_s > longest_stop_s ? progress.ride_begin_s : 0.0;
  const double end_s = all_s - progress.ride_end_s > longest_stop_s ? progress.ride_end_s : all_s;
  const auto sample = [&](double t_s) {
    return std::min(truth.samples(), static_cast<std::size_t>(std::lround(t_s * truth.rate_hz)));
  };
  return {sample(begin_s), sample(end_s)};
}

BandTruth band_of(std::vector<double> speeds_m_s, double split_m_s, double interval_s) {
  BandTruth band;
  band.split_m_s = split_m_s;
  for (const double speed : speeds_m_s)
    (speed <= split_m_s ? band.low_s : band.high_s) += interval_s;
  band.p50_m_s = core::quantile(speeds_m_s, 0.5);
  band.p95_m_s = core::quantile(speeds_m_s, 0.95);
  band.max_m_s = core::quantile(std::move(speeds_m_s), 1.0);
  return band;
}

}  // namespace

EndFigures truth_figures(const Scene& scene, const Truth& truth, bike::EndName name) {
  const EndTruth& ridden = truth.end(name).value();
  const auto curve = VehicleEnd::from(scene.bike, name).curve;
  const auto& split = scene.bike.end(name)->split;
  const Window window = riding(truth);
  const double interval_s = 1.0 / truth.rate_hz;

  EndFigures figures;
  std::vector<double> compression;
  std::vector<double> rebound;
  std::vector<double> travel;
  for (std::size_t i = window.begin; i < window.end; ++i) {
    const double v = ridden.velocity_m_s[i];
    (run::is_compression(v) ? compression : rebound).push_back(std::abs(v));
    travel.push_back(ridden.travel_m[i]);
    figures.airborne_s += ridden.airborne[i] ? interval_s : 0.0;
  }
  figures.compression =
      band_of(std::move(compression), split.compression_m_s.value_or(curve.compression.knee_m_s()),
              interval_s);
  figures.rebound =
      band_of(std::move(rebound), split.rebound_m_s.value_or(curve.rebound.knee_m_s()), interval_s);
  figures.travel_mean_m = core::mean_and_deviation(travel).mean;
  figures.travel_p95_m = core::quantile(travel, 0.95);
  figures.travel_max_m = core::quantile(std::move(travel), 1.0);
  figures.bottom_outs = ridden.bottom_outs;
  return figures;
}

}  // namespace clickwise::sim
