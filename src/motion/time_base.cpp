#include "clickwise/motion/time_base.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/errors.hpp"

namespace clickwise::motion {

namespace {

constexpr double even_share = 0.03;    // of an interval
constexpr double drift_samples = 0.2;  // over a whole stretch

constexpr double most_samples = 2e8;  // two days at 1 kHz: more is a clock gone wrong

// t = first + step i, least squares over a stretch.
struct Line {
  double first_s;
  double step_s;
};

Line fit_line(std::span<const double> t_s) {
  const auto n = static_cast<double>(t_s.size());
  const double middle = (n - 1.0) / 2.0;
  double products = 0.0, sum = 0.0;
  for (std::size_t i = 0; i < t_s.size(); ++i) {
    const double t = t_s[i] - t_s[0];
    products += (static_cast<double>(i) - middle) * t;
    sum += t;
  }
  const double step = products * 12.0 / (n * (n * n - 1.0));
  return {t_s[0] + sum / n - step * middle, step};
}

double largest_residual(std::span<const double> t_s, const Line& line) {
  double largest = 0.0;
  for (std::size_t i = 0; i < t_s.size(); ++i)
    largest =
        std::max(largest, std::abs(t_s[i] - line.first_s - line.step_s * static_cast<double>(i)));
  return largest;
}

// Below 2^51 in size; std::round is a call where the oldest machines have no instruction for it.
double nearest_whole(double value) {
  constexpr double push_out_fraction = 6755399441055744.0;  // 1.5 * 2^52
  return (value + push_out_fraction) - push_out_fraction;
}

// The decimal step (s) of which every stamp is a multiple; 0 when finer than 0.1 us.
double stamp_quantum_s(std::span<const double> t_s) {
  for (const double per_second : {1.0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7}) {
    const auto whole = [&](double t) {
      const double steps = (t - t_s[0]) * per_second;
      return std::abs(steps - nearest_whole(steps)) < 1e-3 + 1e-9 * std::abs(steps);
    };
    if (std::ranges::all_of(t_s, whole)) return 1.0 / per_second;
  }
  return 0.0;
}

void place_evenly(std::span<double> place, const Line& line, const run::TimeBase& base) {
  const double first = (line.first_s - base.start_s) * base.rate_hz;
  const double step = line.step_s * base.rate_hz;
  const bool drifts = std::abs(step - 1.0) * static_cast<double>(place.size()) > drift_samples;
  for (std::size_t i = 0; i < place.size(); ++i) {
    const auto n = static_cast<double>(i);
    place[i] = drifts ? first + step * n : std::round(first) + n;
  }
}

void place_stretch(std::span<const double> t_s, std::span<double> place,
                   const run::TimeBase& base) {
  if (t_s.size() > 2) {
    const Line line = fit_line(t_s);
    const double even = std::max(even_share / base.rate_hz, 0.55 * stamp_quantum_s(t_s));
    if (line.step_s > 0.0 && largest_residual(t_s, line) <= even)
      return place_evenly(place, line, base);
  }
  for (std::size_t i = 0; i < t_s.size(); ++i) place[i] = (t_s[i] - base.start_s) * base.rate_hz;
}

}  // namespace

UniformClock uniform_clock(const run::Recording& recording) {
  const std::vector<double>& t_s = recording.t_s;
  if (t_s.size() < 2 || !(recording.interval_s > 0.0) || !std::isfinite(recording.interval_s))
    throw core::JobError({recording.name}, "the log holds no stretch of time",
                         "give a log with two samples or more whose time goes forward");
  UniformClock clock;
  const double span = (t_s.back() - t_s.front()) / recording.interval_s;
  if (!(span >= 0.0 && span < most_samples))
    throw core::JobError({recording.name},
                         fmt::format("its clock spans {:.3g} s in steps of {:.3g} s",
                                     t_s.back() - t_s.front(), recording.interval_s),
                         "check the time column and its unit, or cut the log at the clock's jump");
  clock.base = {t_s.front(), 1.0 / recording.interval_s,
                static_cast<std::size_t>(std::llround(span)) + 1};
  clock.place.resize(t_s.size());
  for (const run::Stretch& stretch : recording.stretches)
    place_stretch(std::span(t_s).subspan(stretch.begin, stretch.end - stretch.begin),
                  std::span(clock.place).subspan(stretch.begin, stretch.end - stretch.begin),
                  clock.base);
  return clock;
}

std::vector<double> on_base(const run::Recording& recording, std::size_t channel,
                            const UniformClock& clock) {
  const std::vector<double>& readings = recording.channels.at(channel).readings;
  std::vector<double> values(clock.base.samples, std::numeric_limits<double>::quiet_NaN());
  const std::vector<double>& place = clock.place;
  for (const run::Stretch& stretch : recording.stretches) {
    if (stretch.begin == stretch.end) continue;
    auto j = static_cast<std::size_t>(std::max(0.0, std::ceil(place[stretch.begin])));
    for (std::size_t i = stretch.begin; i + 1 < stretch.end; ++i) {
      const double step = place[i + 1] - place[i];
      for (; j < values.size() && static_cast<double>(j) <= place[i + 1]; ++j) {
        const double part = step > 0.0 ? (static_cast<double>(j) - place[i]) / step : 0.0;
        values[j] = readings[i] + part * (readings[i + 1] - readings[i]);
      }
    }
  }
  return values;
}

}  // namespace clickwise::motion
