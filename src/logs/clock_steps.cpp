#include "clock_steps.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

#include "clickwise/core/statistics.hpp"
#include "decimal_grid.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t windows = 2048;
constexpr std::size_t phases_compared = 8;
constexpr std::size_t most_strays = 3;
constexpr double two_16 = 65536.0;
constexpr double two_32 = 4294967296.0;
constexpr double day_s = 86400.0;

// Advances over `lag` samples, none of them backwards, at up to 2048 places.
std::vector<double> advances(const std::vector<double>& stamps, std::size_t lag) {
  std::vector<double> found;
  const std::size_t places = stamps.size() - lag;
  const std::size_t stride = std::max<std::size_t>(1, places / windows);
  for (std::size_t i = 0; i < places; i += stride) {
    const double advance = stamps[i + lag] - stamps[i];
    if (advance >= 0.0) found.push_back(advance);
  }
  return found;
}

double smallest_positive(const std::vector<double>& values) {
  double smallest = 0.0;
  for (const double value : values)
    if (value > 0.0 && (smallest == 0.0 || value < smallest)) smallest = value;
  return smallest;
}

// A counter that begins again at 0 behind `period` ticks.
struct Period {
  double ticks;
  double longest_step;
  bool whole_ticks;
};

bool wrapped(double before, double after, const Period& period) {
  const double step = after - before + period.ticks;
  if (step < 0.0 || step > period.longest_step) return false;
  if (period.whole_ticks && (before != std::floor(before) || after != std::floor(after)))
    return false;
  const bool is_unsigned = after >= 0.0 && before < period.ticks;
  const bool is_signed = after >= -0.5 * period.ticks && before < 0.5 * period.ticks;
  return is_unsigned || is_signed;
}

double median_phase(const std::vector<double>& stamps, std::size_t begin, std::size_t end,
                    std::size_t from, double interval) {
  std::array<double, phases_compared> phases{};
  const std::size_t count = end - begin;
  for (std::size_t k = 0; k < count; ++k) {
    const auto index = static_cast<double>(begin + k) - static_cast<double>(from);
    phases[k] = (stamps[begin + k] - stamps[from]) - index * interval;
  }
  std::sort(phases.begin(), phases.begin() + static_cast<std::ptrdiff_t>(count));
  return 0.5 * (phases[(count - 1) / 2] + phases[count / 2]);
}

}  // namespace

double rough_interval(const std::vector<double>& stamps) {
  if (stamps.size() < 2) return 0.0;
  std::size_t lag = std::clamp<std::size_t>((stamps.size() - 1) / 4, 1, 16);
  const double step = smallest_positive(advances(stamps, 1));
  for (;;) {
    std::vector<double> found = advances(stamps, lag);
    if (found.empty()) return 0.0;
    const double median = core::median(std::move(found));
    if (median >= 8.0 * step || lag * 8 >= stamps.size()) return median / static_cast<double>(lag);
    lag *= 2;
  }
}

double stamp_grid(const std::vector<double>& stamps) {
  constexpr std::size_t block = 64;
  std::vector<double> sample;
  const std::size_t stride = std::max(block, stamps.size() / block);
  for (std::size_t begin = 0; begin < stamps.size(); begin += stride)
    for (std::size_t i = begin; i < std::min(begin + block, stamps.size()); ++i)
      sample.push_back(stamps[i]);
  return decimal_grid(sample);
}

long long undo_wraps(std::vector<double>& ticks, double seconds_per_tick, bool time_of_day,
                     double rough_ticks) {
  std::vector<Period> periods;
  const double few = 8.0 * rough_ticks;
  if (time_of_day) {
    periods.push_back({day_s / seconds_per_tick, day_s / seconds_per_tick / 64.0, false});
  } else {
    const double us_32 = two_32 * 1e-6 / seconds_per_tick;
    periods = {{two_16, std::min(few, two_16 / 4.0), true},
               {two_32, two_32 / 64.0, true},
               {us_32, us_32 / 64.0, false}};
  }
  long long count = 0;
  double offset = 0.0;
  double before = ticks.front();
  for (double& tick : ticks) {
    const double after = tick;
    if (after < before) {
      const auto period = std::find_if(periods.begin(), periods.end(),
                                       [&](const Period& p) { return wrapped(before, after, p); });
      if (period != periods.end()) {
        offset += period->ticks;
        ++count;
      }
    }
    tick += offset;
    before = after;
  }
  return count;
}

std::vector<std::size_t> stray_stamps(const std::vector<double>& stamps, double interval,
                                      const std::vector<std::size_t>& barriers) {
  std::vector<std::size_t> strays;
  for (std::size_t i = 1; i < stamps.size(); ++i) {
    const double before = stamps[i - 1];
    const double step = stamps[i] - before;
    if (step >= 0.0 && step <= 4.0 * interval) continue;
    for (std::size_t k = 1; k <= most_strays && i + k < stamps.size(); ++k) {
      const auto barrier = std::lower_bound(barriers.begin(), barriers.end(), i);
      const bool barred = barrier != barriers.end() && *barrier <= i + k;
      if (barred) break;
      const double span = stamps[i + k] - before;
      const bool returns = span > 0.1 * interval && (step < 0.0 || span < step) &&
                           span <= (static_cast<double>(k) + 2.5) * interval;
      if (!returns) continue;
      for (std::size_t stray = i; stray < i + k; ++stray) strays.push_back(stray);
      i += k;
      break;
    }
  }
  return strays;
}

void spread_equal_stamps(std::vector<double>& stamps, std::size_t begin, std::size_t end,
                         double interval, double span) {
  for (std::size_t first = begin; first < end;) {
    std::size_t next = first + 1;
    while (next < end && stamps[next] == stamps[first]) ++next;
    const auto count = static_cast<double>(next - first);
    const double room = next < end && stamps[next] > stamps[first]
                            ? std::min(stamps[next] - stamps[first], std::max(span, interval))
                            : count * interval;
    for (std::size_t i = first + 1; i < next; ++i)
      stamps[i] = stamps[first] + room * static_cast<double>(i - first) / count;
    first = next;
  }
}

double phase_change(const std::vector<double>& stamps, std::size_t at, std::size_t begin,
                    double interval) {
  const std::size_t first = std::max(begin, at >= phases_compared ? at - phases_compared : 0);
  std::size_t end = at + 1;
  const std::size_t most = std::min(stamps.size(), at + phases_compared);
  const auto goes_on = [&](std::size_t i) {
    const double step = stamps[i] - stamps[i - 1];
    return step >= 0.0 && step <= 4.0 * interval;
  };
  while (end < most && goes_on(end)) ++end;
  return median_phase(stamps, at, end, at - 1, interval) -
         median_phase(stamps, first, at, at - 1, interval);
}

StampLine fit_line(const std::vector<double>& stamps, std::size_t begin, std::size_t end) {
  const auto count = static_cast<double>(end - begin);
  const double middle = 0.5 * (count - 1.0);
  const auto place = [&](std::size_t i) { return static_cast<double>(i - begin) - middle; };
  double sum = 0.0;
  double moment = 0.0;
  for (std::size_t i = begin; i < end; ++i) {
    sum += stamps[i] - stamps[begin];
    moment += place(i) * (stamps[i] - stamps[begin]);
  }
  const double mean = sum / count;
  StampLine line;
  line.step = moment * 12.0 / (count * (count * count - 1.0));
  double least = std::numeric_limits<double>::infinity();
  double most = -least;
  for (std::size_t i = begin; i < end; ++i) {
    const double rest = stamps[i] - stamps[begin] - (mean + line.step * place(i));
    least = std::min(least, rest);
    most = std::max(most, rest);
  }
  line.start = stamps[begin] + mean - line.step * middle + 0.5 * (most + least);
  line.range = most - least;
  return line;
}

}  // namespace clickwise::logs
