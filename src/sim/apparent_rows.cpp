#include "apparent_rows.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "clickwise/bike/spring.hpp"

namespace clickwise::sim {

namespace {

// At the wheel, m/s; denser where curves bend.
constexpr std::array<double, 20> wheel_knots_m_s{0.03, 0.06, 0.09, 0.12, 0.16, 0.2, 0.27,
                                                 0.35, 0.45, 0.6,  0.8,  1.0,  1.3, 1.7,
                                                 2.2,  2.8,  3.5,  4.5,  6.0,  8.0};
constexpr std::size_t bleed_knots = 6;  // up to here force goes about with the speed's square
constexpr double still_noises = 3.0;    // slower than this many noises: the direction is not known
constexpr double blocks_wanted = 24.0;
constexpr double shortest_block_s = 1.0, longest_block_s = 5.0;
constexpr double fewest_blocks = 4.0;

double middle_ratio(const ApparentEnd& end) {
  return end.ratio(0.5 * end.stroke_m);
}

void mask_stops(const ApparentEnd& end, const SprungRide& ride, const ApparentOptions& options,
                std::vector<std::uint8_t>& usable) {
  const auto guard = static_cast<std::size_t>(std::ceil(options.guard_s / ride.interval_s));
  for (std::size_t i = 0; i < usable.size(); ++i) {
    if (ride.counted[i] == 0) continue;
    const double x = ride.travel_m[i];
    if (x >= options.margin_m && x <= end.stroke_m - options.margin_m) continue;
    const std::size_t from = i > guard ? i - guard : 0;
    const std::size_t to = std::min(i + guard + 1, usable.size());
    std::fill(usable.begin() + static_cast<std::ptrdiff_t>(from),
              usable.begin() + static_cast<std::ptrdiff_t>(to), std::uint8_t{0});
  }
}

std::vector<std::uint8_t> usable_samples(const ApparentEnd& end, const SprungRide& ride,
                                         const ApparentOptions& options) {
  const double still =
      std::max(options.still_m_s / middle_ratio(end), still_noises * ride.velocity_noise_m_s);
  std::vector<std::uint8_t> usable(ride.travel_m.size());
  for (std::size_t i = 0; i < usable.size(); ++i)
    usable[i] = ride.counted[i] != 0 && std::isfinite(ride.felt_m_s2[i]) &&
                std::abs(ride.velocity_m_s[i]) >= still;
  mask_stops(end, ride, options, usable);
  return usable;
}

void lay_blocks(double interval_s, ApparentSamples& samples) {
  double usable_s = 0.0;
  for (const std::uint8_t one : samples.usable) usable_s += one * interval_s;
  samples.block_s = std::clamp(usable_s / blocks_wanted, shortest_block_s, longest_block_s);
  double passed_s = 0.0;
  for (const std::uint8_t one : samples.usable) {
    samples.block.push_back(static_cast<int>(passed_s / samples.block_s));
    passed_s += one * interval_s;
  }
  samples.blocks = samples.block.empty() ? 0 : samples.block.back() + 1;
}

std::size_t direction_of(double velocity_m_s) {
  return velocity_m_s >= 0.0 ? 0 : 1;
}

// The hat functions over the knots of one direction, straight in v^2 where a bleed rules, in v
// above; that of standstill is left out.
class Hats {
public:
  explicit Hats(const std::vector<double>& speed_m_s) : speed_(speed_m_s) {}

  bool covers(double speed_m_s) const { return !speed_.empty() && speed_m_s <= speed_.back(); }

  template <typename Add>
  void weigh(double speed_m_s, const Add& add) const {
    const auto above = std::lower_bound(speed_.begin(), speed_.end(), speed_m_s);
    const auto k = static_cast<std::size_t>(above - speed_.begin());
    const double low = k > 0 ? speed_[k - 1] : 0.0;
    const double high = speed_[k];
    const double part = k < bleed_knots
                            ? (speed_m_s * speed_m_s - low * low) / (high * high - low * low)
                            : (speed_m_s - low) / (high - low);
    add(k, part);
    if (k > 0) add(k - 1, 1.0 - part);
  }

private:
  const std::vector<double>& speed_;
};

void keep_filled(const std::vector<double>& candidates,
                 const std::vector<std::vector<double>>& seconds, const ApparentOptions& options,
                 std::size_t d, Knots& knots) {
  for (std::size_t k = 0; k < candidates.size(); ++k) {
    double sum = 0.0, squares = 0.0;
    for (const double s : seconds[k]) {
      sum += s;
      squares += s * s;
    }
    const double blocks = squares > 0.0 ? sum * sum / squares : 0.0;
    if (sum < options.least_s || blocks < fewest_blocks) return;
    knots.speed_m_s[d].push_back(candidates[k]);
    knots.seconds[d].push_back(sum);
    knots.blocks[d].push_back(blocks);
  }
}

// Adds the sample to the row's hats, in place of its knots.
void add_hats(const Hats& hats, std::size_t offset, double speed_m_s, double weight,
              ApparentRow& row) {
  hats.weigh(speed_m_s, [&](std::size_t k, double part) {
    const std::size_t index = offset + k;
    const auto found = std::find_if(row.hats.begin(), row.hats.end(),
                                    [&](const auto& hat) { return hat.first == index; });
    if (found == row.hats.end())
      row.hats.emplace_back(index, weight * part);
    else
      found->second += weight * part;
  });
}

}  // namespace

ApparentSamples prepare(const ApparentEnd& end, const SprungRide& ride,
                        const ApparentOptions& options) {
  ApparentSamples samples;
  samples.usable = usable_samples(end, ride, options);
  const std::size_t count = samples.usable.size();
  for (auto* series : {&samples.spring_n, &samples.load_kg, &samples.damper_n})
    series->resize(count);
  for (std::size_t i = 0; i < count; ++i) {
    if (samples.usable[i] == 0) continue;
    const double x = ride.travel_m[i];
    samples.spring_n[i] = bike::spring_force_n(end.spring, x, end.stroke_m);
    samples.load_kg[i] = end.sprung_mass_kg * end.ratio(x);
    if (end.curve) samples.damper_n[i] = end.curve->force_n(ride.velocity_m_s[i]);
  }
  lay_blocks(ride.interval_s, samples);
  return samples;
}

Knots choose_knots(const ApparentEnd& end, const SprungRide& ride, const ApparentSamples& samples,
                   const ApparentOptions& options) {
  std::vector<double> candidates(wheel_knots_m_s.begin(), wheel_knots_m_s.end());
  for (double& knot : candidates) knot /= middle_ratio(end);
  const Hats hats(candidates);
  using Seconds = std::vector<std::vector<double>>;
  const auto blocks = static_cast<std::size_t>(samples.blocks);
  Seconds seconds[2];
  for (Seconds& one : seconds) one.assign(candidates.size(), std::vector<double>(blocks));
  for (std::size_t i = 0; i < samples.usable.size(); ++i) {
    const double speed = std::abs(ride.velocity_m_s[i]);
    if (samples.usable[i] == 0 || !hats.covers(speed)) continue;
    Seconds& of = seconds[direction_of(ride.velocity_m_s[i])];
    const auto block = static_cast<std::size_t>(samples.block[i]);
    hats.weigh(speed, [&](std::size_t k, double part) {
      if (part >= 0.5) of[k][block] += ride.interval_s;
    });
  }
  Knots knots;
  for (const std::size_t d : {0u, 1u}) keep_filled(candidates, seconds[d], options, d, knots);
  return knots;
}

void each_row(const SprungRide& ride, std::span<const double> felt_m_s2,
              const ApparentSamples& samples, const Knots& knots,
              const std::function<void(const ApparentRow&)>& see) {
  const Hats hats[2] = {Hats(knots.speed_m_s[0]), Hats(knots.speed_m_s[1])};
  const std::size_t offset[2] = {0, knots.speed_m_s[0].size()};
  const double half_period_s = ride.cutoff_hz > 0.0 ? 0.5 / ride.cutoff_hz : 0.0;
  const auto length =
      std::max<std::size_t>(1, static_cast<std::size_t>(half_period_s / ride.interval_s));
  ApparentRow row;
  std::size_t filled = 0;
  for (std::size_t i = 0; i < samples.usable.size(); ++i) {
    const double v = ride.velocity_m_s[i];
    const std::size_t d = direction_of(v);
    const double sign = d == 0 ? 1.0 : -1.0;
    const bool fits = samples.usable[i] != 0 && std::isfinite(felt_m_s2[i]) &&
                      hats[d].covers(std::abs(v)) && (filled == 0 || sign == row.sign);
    if (!fits) {
      filled = 0;
      continue;
    }
    if (filled == 0) row = {.sign = sign, .block = samples.block[i], .first = i};
    const double weight = 1.0 / static_cast<double>(length);
    row.load_n += weight * samples.load_kg[i] * felt_m_s2[i];
    row.held_n += weight * samples.spring_n[i];
    row.damper_n += weight * samples.damper_n[i];
    row.felt_per_n += weight / samples.load_kg[i];
    add_hats(hats[d], offset[d], std::abs(v), weight * sign, row);
    if (++filled < length) continue;
    see(row);
    filled = 0;
  }
}

}  // namespace clickwise::sim
