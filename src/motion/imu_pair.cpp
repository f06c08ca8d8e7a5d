#include "clickwise/motion/imu_pair.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <stdexcept>

#include "clickwise/bike/spring.hpp"
#include "clickwise/core/statistics.hpp"
#include "clickwise/core/units.hpp"
#include "swing.hpp"

namespace clickwise::motion {

namespace {

constexpr double usual_sag = 0.27;              // of the stroke; common practice, no source
constexpr double tellable_travel_share = 0.05;  // of the stroke: travel worse than that is withheld
constexpr double mass_doubt = 0.15;             // of the sprung mass: rider, bags, pitch

run::Motion empty_motion(const run::TimeBase& base) {
  const double unknown = std::numeric_limits<double>::quiet_NaN();
  run::Motion motion;
  motion.time = base;
  motion.source = run::Source::imu_pair;
  motion.travel_m.assign(base.samples, unknown);
  motion.velocity_m_s.assign(base.samples, unknown);
  motion.velocity_sigma_m_s.assign(base.samples, unknown);
  motion.valid.assign(base.samples, 0);
  motion.travel_known = false;
  return motion;
}

double wheel_load_n(double sprung_mass_kg) {
  return sprung_mass_kg * core::standard_gravity_m_s2;
}

SlideSettings settings_for(const bike::End& end, std::optional<double> sprung_mass_kg,
                           const run::TimeBase& base) {
  SlideSettings settings;
  settings.stroke_m = end.stroke_m;
  settings.interval_s = base.interval_s();
  settings.sag_m = usual_sag * end.stroke_m;
  if (!end.spring || !sprung_mass_kg) return settings;
  settings.sag_m = bike::equilibrium_travel_m(end, wheel_load_n(*sprung_mass_kg));
  settings.spring_m_s2 = [&end, mass = *sprung_mass_kg](double travel_m) {
    return bike::spring_force_n(*end.spring, travel_m, end.stroke_m) / mass;
  };
  return settings;
}

// Travel follows the spring's balance only as well as the sprung mass is known.
double sag_doubt_m(const bike::End& end, std::optional<double> sprung_mass_kg, double sag_m) {
  if (!end.spring || !sprung_mass_kg) return 0.1 * end.stroke_m;
  const double load = wheel_load_n(*sprung_mass_kg);
  const double more = bike::equilibrium_travel_m(end, (1.0 + mass_doubt) * load);
  return std::max(more - sag_m, 0.02 * end.stroke_m);
}

// The velocity's sigma where the end moves least: what its noise is at rest.
double rest_noise_m_s(const Slid& slid, const std::vector<std::uint8_t>& valid) {
  std::vector<double> sigma;
  for (std::size_t i = 0; i < valid.size(); ++i)
    if (valid[i]) sigma.push_back(slid.velocity_sigma_m_s[i]);
  return sigma.empty() ? 0.0 : core::quantile(std::move(sigma), 0.05);
}

void judge_travel(const Slid& slid, double doubt_m, const bike::End& end, run::Motion& motion) {
  std::vector<double> sigma;
  for (std::size_t i = 0; i < motion.valid.size(); ++i)
    if (motion.valid[i]) sigma.push_back(slid.travel_sigma_m[i]);
  if (sigma.empty()) {
    motion.travel_withheld = "the IMU pair gave no usable reading";
    return;
  }
  const double all_m = std::hypot(core::quantile(std::move(sigma), 0.9), doubt_m);
  motion.reading_noise_m = all_m;
  motion.travel_known = all_m <= tellable_travel_share * end.stroke_m;
  if (motion.travel_known) return;
  motion.travel_withheld = fmt::format(
      "travel is withheld: units that feel acceleration know it to +- {:.0f} mm only; velocity is "
      "not touched by that",
      core::to_mm(all_m));
}

void fill(const Slid& slid, const std::vector<std::uint8_t>& usable, run::Motion& motion) {
  motion.travel_m = slid.travel_m;
  motion.velocity_m_s = slid.velocity_m_s;
  motion.velocity_sigma_m_s = slid.velocity_sigma_m_s;
  motion.valid = usable;
  motion.velocity_noise_m_s = rest_noise_m_s(slid, usable);
}

std::vector<std::uint8_t> both_usable(const PairSeries& series) {
  std::vector<std::uint8_t> usable = series.upper.usable;
  for (std::size_t i = 0; i < usable.size(); ++i) usable[i] &= series.lower.usable[i];
  return usable;
}

// A velocity that runs mostly the wrong way: hits compress faster than springs extend.
std::string reversed_swing(const Slid& slid, const std::vector<std::uint8_t>& usable) {
  std::vector<double> velocity;
  for (std::size_t i = 0; i < usable.size(); ++i)
    if (usable[i]) velocity.push_back(slid.velocity_m_s[i]);
  if (velocity.size() < 1000) return {};
  const double compression = core::quantile_of(velocity, 0.999);
  const double rebound = -core::quantile_of(velocity, 0.001);
  if (compression > 0.75 * rebound) return {};
  return fmt::format(
      "it would extend at up to {:.2g} m/s and compress at {:.2g} m/s, which no suspension does: "
      "the swing axis is reversed, so turn the signs of swing_axis",
      rebound, compression);
}

// Travel that the swing rate asks for, against what the link has.
std::string impossible_swing(const PairSeries& series, const bike::End& end, double interval_s) {
  const Eigen::Vector3d axis(end.imu->axis.data());
  double squares = 0.0;
  double seconds = 0.0;
  for (std::size_t i = 0; i < series.upper.gyro.size(); ++i) {
    if (!series.upper.usable[i] || !series.lower.usable[i]) continue;
    squares += std::pow(axis.dot(series.lower.gyro[i] - series.upper.gyro[i]), 2) * interval_s;
    seconds += interval_s;
  }
  if (!(seconds > 0.0)) return {};
  const double wheel_m_s = std::sqrt(squares / seconds) * end.imu->swing_m->slope(0.0);
  if (wheel_m_s < 15.0) return {};
  return fmt::format(
      "its wheel would move at {:.3g} m/s rms: gyro_unit is wrong by 57.3, so write the other one",
      wheel_m_s);
}

std::string measure(PairSeries& series, const bike::End& end, std::optional<double> mass,
                    const UniformClock& clock, SlideSettings& settings, ImuMotion& result) {
  const double rate_hz = clock.base.rate_hz;
  Slid slid;
  std::vector<std::uint8_t> usable;
  if (end.imu->swinging()) {
    align_units(series, bearings(series, *end.imu).lower, rate_hz);
    usable = both_usable(series);
    if (auto wrong = impossible_swing(series, end, settings.interval_s); !wrong.empty())
      return wrong;
    slid = swing(series, bearings(series, *end.imu), end, settings);
    if (auto wrong = reversed_swing(slid, usable); !wrong.empty()) return wrong;
    result.motion.smoothing =
        fmt::format("two gyros through a Kalman smoother at {:.0f} Hz", rate_hz);
  } else {
    align_units(series, Eigen::Vector3d::Zero(), rate_hz);
    usable = both_usable(series);
    const Axial along = axial(series, *end.imu, settings.sag_m);
    std::optional<double> mass_ratio;
    if (mass && end.unsprung_mass_kg) mass_ratio = *mass / *end.unsprung_mass_kg;
    slid = slide(along, rebuild(along, mass_ratio), settings);
    result.motion.smoothing = fmt::format(
        "two accelerometers through a Kalman smoother at {:.0f} Hz; {:.1f} degrees between the "
        "units taken out",
        clock.base.rate_hz, along.mounting_rad / core::radians_per_degree);
    if (!end.imu->upper.gyro)
      result.notes.push_back(
          "the units have no gyros: what rotation adds to their difference stays in the velocity");
  }
  fill(slid, usable, result.motion);
  const bool seen = !settings.seen_travel_m.empty();
  judge_travel(slid, seen ? 0.0 : sag_doubt_m(end, mass, settings.sag_m), end, result.motion);
  return {};
}

}  // namespace

ImuMotion from_imu_pair(const run::Recording& recording, const PairChannels& channels,
                        const bike::End& end, std::optional<double> sprung_mass_kg,
                        const UniformClock& clock, const SecondOpinion& second) {
  if (!end.imu) throw std::invalid_argument("end.imu is empty; must be a pair");
  ImuMotion result{empty_motion(clock.base), {}, {}};
  PairSeries series = pair_series(recording, channels, *end.imu, clock);
  std::string wrong = contradiction(series, end);
  if (wrong.empty()) {
    SlideSettings settings = settings_for(end, sprung_mass_kg, clock.base);
    if (second.potentiometer != nullptr) {
      settings.seen_travel_m = second.potentiometer->travel_m;
      for (std::size_t i = 0; i < settings.seen_travel_m.size(); ++i)
        if (!second.potentiometer->valid[i]) settings.seen_travel_m[i] = NAN;
      settings.seen_variance_m2 =
          std::pow(std::max(2e-4, second.potentiometer->reading_noise_m), 2);
    }
    wrong = measure(series, end, sprung_mass_kg, clock, settings, result);
  }
  result.faults = series.faults;
  result.notes.insert(result.notes.end(), series.notes.begin(), series.notes.end());
  if (!wrong.empty()) {
    result.notes.push_back("the IMU pair is left out: " + wrong);
    result.motion.travel_withheld = result.notes.back();
  }
  return result;
}

}  // namespace clickwise::motion
