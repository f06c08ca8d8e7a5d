#include "clickwise/advice/find_symptoms.hpp"

#include <algorithm>
#include <boost/math/special_functions/erf.hpp>
#include <boost/math/special_functions/gamma.hpp>
#include <cmath>
#include <functional>
#include <limits>
#include <numbers>

#include "blocks.hpp"
#include "clickwise/bike/spring.hpp"
#include "clickwise/core/parallel.hpp"
#include "clickwise/core/statistics.hpp"
#include "clickwise/core/units.hpp"

namespace clickwise::advice {

namespace {

constexpr double least_riding_s = 10.0;
constexpr double body_speed_m_s = 0.15;
constexpr double still_m_s = 0.02;

// One end's ride with its blocks and the figures of each.
struct Evidence {
  const EndRide* ride;
  std::vector<Block> blocks;
  double riding_s = 0.0;

  explicit Evidence(const EndRide& of) : ride(&of), blocks(blocks_of(of)) {
    for (const Block& block : blocks) riding_s += block.seconds;
  }

  // Sums over the counted samples of each block.
  template <typename OfSample>
  std::vector<double> sums(const OfSample& of_sample) const {
    std::vector<double> result;
    for (const Block& block : blocks) {
      double sum = 0.0;
      for (std::size_t i = block.begin; i < block.end; ++i)
        if ((*ride->counted)[i]) sum += of_sample(i);
      result.push_back(sum * ride->motion->time.interval_s());
    }
    return result;
  }
};

double weighted_ratio(const std::vector<double>& over, const std::vector<double>& under,
                      const std::vector<int>& times) {
  double numerator = 0.0;
  double denominator = 0.0;
  for (std::size_t i = 0; i < times.size(); ++i) {
    numerator += times[i] * over[i];
    denominator += times[i] * under[i];
  }
  return denominator > 0.0 ? numerator / denominator : 0.0;
}

// The figure against an upper bound (sign +1) or a lower one (-1).
Symptom against_aim(SymptomKind kind, const EndRide& ride, const Sampled& figure, double aim,
                    double sign) {
  Symptom symptom{kind, ride.name, figure.value, figure.low, figure.high, aim, sign};
  symptom.error = std::hypot(figure.error, aim_tolerance(kind));
  symptom.severity = std::max(0.0, sign * (figure.value - aim) / symptom.error);
  return symptom;
}

// Rate per minute of `count` events: posterior Gamma(count + 1/2, minutes).
Symptom rate_above_aim(SymptomKind kind, const Evidence& evidence, long count, double aim) {
  const double minutes = evidence.riding_s / 60.0;
  const double shape = static_cast<double>(count) + 0.5;
  Symptom symptom{kind, evidence.ride->name, static_cast<double>(count) / minutes};
  symptom.low = boost::math::gamma_p_inv(shape, 0.05) / minutes;
  symptom.high = boost::math::gamma_p_inv(shape, 0.95) / minutes;
  symptom.aim = aim;
  symptom.error = std::hypot(std::sqrt(shape) / minutes, aim_tolerance(kind));
  if (symptom.value <= aim) return symptom;
  const double within_aim = std::max(boost::math::gamma_p(shape, aim * minutes), 1e-12);
  symptom.severity = std::max(0.0, std::sqrt(2.0) * boost::math::erfc_inv(2.0 * within_aim));
  return symptom;
}

Sampled mean_travel_percent(const Evidence& evidence, unsigned seed) {
  const std::vector<double>& travel_m = evidence.ride->motion->travel_m;
  const std::vector<double> sums = evidence.sums([&](std::size_t i) { return travel_m[i]; });
  std::vector<double> seconds;
  for (const Block& block : evidence.blocks) seconds.push_back(block.seconds);
  const double scale = 100.0 / evidence.ride->end->stroke_m;
  return bootstrap(sums.size(), seed, [&](const std::vector<int>& times) {
    return scale * weighted_ratio(sums, seconds, times);
  });
}

// The largest of a ride hangs on one hit, so it is as uncertain as the largest hits differ: for an
// exponential tail of scale a it scatters by pi a / sqrt(6), and a is the mean of the k largest
// block maxima over the next one (Weissman, J. Am. Stat. Assoc. 73:812-815, 1978). A bootstrap of a
// maximum would say nothing.
Sampled largest_travel_percent(const Evidence& evidence) {
  std::vector<double> largest;
  for (const Block& block : evidence.blocks) {
    double most_m = 0.0;
    for (std::size_t i = block.begin; i < block.end; ++i)
      if ((*evidence.ride->counted)[i])
        most_m = std::max(most_m, evidence.ride->motion->travel_m[i]);
    largest.push_back(100.0 * most_m / evidence.ride->end->stroke_m);
  }
  std::sort(largest.begin(), largest.end(), std::greater<>());
  constexpr std::size_t most_used = 5;
  const std::size_t k = std::min(most_used, largest.size() - 1);
  double scale = 0.0;
  for (std::size_t i = 0; i < k; ++i) scale += (largest[i] - largest[k]) / static_cast<double>(k);
  const double error = std::numbers::pi / std::sqrt(6.0) * scale;
  const double value = largest.front();
  return {value, value - 1.645 * error, value + 1.645 * error, error};
}

// Climb per hit over all trains, each train one unit of the bootstrap.
Sampled climb_mm_per_hit(const EndRide& ride, unsigned seed) {
  std::vector<double> climbs;
  std::vector<double> hits;
  for (const run::HitTrain& train : *ride.trains) {
    climbs.push_back(core::to_mm(train.climb_m_per_hit) * train.hits);
    hits.push_back(train.hits);
  }
  return bootstrap(climbs.size(), seed, [&](const std::vector<int>& times) {
    return weighted_ratio(climbs, hits, times);
  });
}

double static_load_n(const EndRide& ride) {
  return *ride.sprung_mass_kg * core::standard_gravity_m_s2 * ride.end->ratio(0.0);
}

Sampled compression_force_ratio(const Evidence& evidence) {
  const damper::Law law = evidence.ride->damper->curve().compression;
  const std::vector<double>& velocity_m_s = evidence.ride->motion->velocity_m_s;
  std::vector<double> all;
  std::vector<double> by_block;
  for (const Block& block : evidence.blocks) {
    std::vector<double> speeds;
    for (std::size_t i = block.begin; i < block.end; ++i)
      if ((*evidence.ride->counted)[i] && run::is_compression(velocity_m_s[i]))
        speeds.push_back(velocity_m_s[i]);
    if (speeds.empty()) continue;
    all.insert(all.end(), speeds.begin(), speeds.end());
    by_block.push_back(law.force_n(core::quantile(std::move(speeds), 0.95)));
  }
  if (by_block.size() < 2) return {};
  const double load_n = static_load_n(*evidence.ride);
  const double value = law.force_n(core::quantile(std::move(all), 0.95)) / load_n;
  const double error = core::mean_and_deviation(by_block).deviation /
                       std::sqrt(static_cast<double>(by_block.size())) / load_n;
  return {value, value - 1.645 * error, value + 1.645 * error, error};
}

Sampled held_percent(const Evidence& evidence, unsigned seed) {
  const std::vector<double> held = evidence.sums([&](std::size_t i) {
    return std::abs(evidence.ride->motion->velocity_m_s[i]) < still_m_s ? 100.0 : 0.0;
  });
  const std::vector<double> riding = evidence.sums([](std::size_t) { return 1.0; });
  return bootstrap(held.size(), seed, [&](const std::vector<int>& times) {
    return weighted_ratio(held, riding, times);
  });
}

void measure_travel(const Evidence& evidence, const bike::Aims& aims, unsigned seed,
                    std::vector<Symptom>& symptoms) {
  const EndRide& ride = *evidence.ride;
  const Sampled mean = mean_travel_percent(evidence, seed);
  symptoms.push_back(
      against_aim(SymptomKind::rides_deep, ride, mean, 100.0 * aims.travel_mean_share_high, 1.0));
  symptoms.push_back(
      against_aim(SymptomKind::rides_high, ride, mean, 100.0 * aims.travel_mean_share_low, -1.0));
  symptoms.push_back(against_aim(SymptomKind::unused_travel, ride, largest_travel_percent(evidence),
                                 100.0 * aims.travel_used_share, -1.0));
}

void measure_events(const Evidence& evidence, const bike::Aims& aims, unsigned seed,
                    std::vector<Symptom>& symptoms) {
  const EndRide& ride = *evidence.ride;
  const auto hard = std::count_if(ride.bottom_outs->begin(), ride.bottom_outs->end(),
                                  [&](const run::EndStop& stop) { return is_hard(ride, stop); });
  const auto slow = static_cast<long>(ride.bottom_outs->size()) - hard;
  symptoms.push_back(
      rate_above_aim(SymptomKind::hard_bottoming, evidence, hard, aims.bottom_outs_per_minute));
  symptoms.push_back(
      rate_above_aim(SymptomKind::slow_bottoming, evidence, slow, aims.bottom_outs_per_minute));
  symptoms.push_back(rate_above_aim(SymptomKind::returns_too_fast, evidence,
                                    static_cast<long>(top_outs_on_the_ground(ride).size()),
                                    aims.top_outs_per_minute));
  if (ride.trains->size() >= 3)
    symptoms.push_back(against_aim(SymptomKind::packs_down, ride, climb_mm_per_hit(ride, seed),
                                   aims.packing_mm_per_hit, 1.0));
}

void measure_damper(const Evidence& evidence, const bike::Aims& aims, unsigned seed,
                    std::vector<Symptom>& symptoms) {
  const EndRide& ride = *evidence.ride;
  if (!ride.damper) return;
  if (ride.sprung_mass_kg)
    symptoms.push_back(against_aim(SymptomKind::harsh, ride, compression_force_ratio(evidence),
                                   aims.harsh_force_ratio, 1.0));
  symptoms.push_back(against_aim(SymptomKind::held_by_platform, ride, held_percent(evidence, seed),
                                 100.0 * aims.held_share, 1.0));
  if (const std::optional<double> damping = body_damping_ratio(ride, ride.damper->curve())) {
    // Known only as well as the curve: 10 % for a measured one, 30 % for an assumed one.
    const double error = (ride.damper->assumed() ? 0.3 : 0.1) * *damping;
    symptoms.push_back(
        against_aim(SymptomKind::wallows, ride,
                    {*damping, *damping - 1.645 * error, *damping + 1.645 * error, error},
                    aims.body_damping_low, -1.0));
  }
}

}  // namespace

bool is_hard(const EndRide& ride, const run::EndStop& bottom_out) {
  return bottom_out.closing_speed_m_s > ride.compression_split_m_s;
}

std::optional<double> static_sag_percent(const EndRide& ride) {
  if (!ride.end->spring || !ride.sprung_mass_kg) return std::nullopt;
  const double load_n = *ride.sprung_mass_kg * core::standard_gravity_m_s2;
  return 100.0 * bike::equilibrium_travel_m(*ride.end, load_n) / ride.end->stroke_m;
}

std::optional<double> body_damping_ratio(const EndRide& ride, const damper::Curve& curve) {
  if (!ride.end->spring || !ride.sprung_mass_kg) return std::nullopt;
  const double damping_n_s_m =
      0.5 * (curve.compression.force_n(body_speed_m_s) + curve.rebound.force_n(body_speed_m_s)) /
      body_speed_m_s;
  double travel_m = 0.0;
  double samples = 0.0;
  for (std::size_t i = 0; i < ride.counted->size(); ++i) {
    if (!(*ride.counted)[i]) continue;
    travel_m += ride.motion->travel_m[i];
    samples += 1.0;
  }
  if (samples == 0.0) return std::nullopt;
  travel_m = std::clamp(travel_m / samples, 0.0, ride.end->stroke_m);
  const double ratio = ride.end->ratio(travel_m);
  const double rate_n_m = bike::wheel_rate_n_m(*ride.end, travel_m);
  if (rate_n_m <= 0.0) return std::nullopt;
  return damping_n_s_m / (ratio * ratio) / (2.0 * std::sqrt(rate_n_m * *ride.sprung_mass_kg));
}

std::vector<Symptom> measure_symptoms(const std::vector<EndRide>& rides, const bike::Aims& aims,
                                      unsigned seed) {
  std::vector<std::vector<Symptom>> of_ends(rides.size());
  core::parallel_for(rides.size(), [&](std::size_t i) {
    const Evidence evidence(rides[i]);
    if (evidence.riding_s < least_riding_s) return;
    measure_travel(evidence, aims, seed, of_ends[i]);
    measure_events(evidence, aims, seed, of_ends[i]);
    measure_damper(evidence, aims, seed, of_ends[i]);
  });
  std::vector<Symptom> symptoms;
  for (const std::vector<Symptom>& of_end : of_ends)
    symptoms.insert(symptoms.end(), of_end.begin(), of_end.end());
  return symptoms;
}

std::vector<Symptom> find_symptoms(std::vector<Symptom> measured) {
  std::erase_if(measured, [](const Symptom& symptom) { return symptom.severity <= 0.0; });
  std::stable_sort(measured.begin(), measured.end(),
                   [](const Symptom& a, const Symptom& b) { return a.severity > b.severity; });
  return measured;
}

std::vector<Symptom> find_symptoms(const std::vector<EndRide>& rides, const bike::Aims& aims,
                                   unsigned seed) {
  return find_symptoms(measure_symptoms(rides, aims, seed));
}

}  // namespace clickwise::advice
