#include "clock_breaks.hpp"

#include <algorithm>
#include <iterator>

#include "clickwise/core/wide.hpp"
#include "clock_steps.hpp"

namespace clickwise::logs {

namespace {

constexpr double day_s = 86400.0;
constexpr double longest_clean_step = 1.5;   // intervals
constexpr double shortest_clean_step = 0.1;  // intervals
constexpr double jump_of_phase = 0.5;        // intervals
constexpr double coarse_grid = 0.25;         // intervals
constexpr double range_of_drift = 1.25;      // grid steps
constexpr std::ptrdiff_t fewest_of_drift = 3;

constexpr std::size_t looked_at_once = 64;

// Without a branch in it, since nearly all steps are clean.
CLICKWISE_WIDE
bool any_step_outside(const double* stamps, std::size_t begin, std::size_t end, double least,
                      double most) {
  long long outside = 0;
  for (std::size_t i = begin; i < end; ++i) {
    const double step = stamps[i] - stamps[i - 1];
    outside |= static_cast<long long>(step < least) | static_cast<long long>(step > most);
  }
  return outside != 0;
}

class BreakFinder {
public:
  BreakFinder(const std::vector<double>& stamps, const ClockMarks& marks, double interval_s)
      : stamps_(stamps), marks_(marks), interval_s_(interval_s) {}

  Findings find() {
    for (const std::size_t at : places_to_look_at()) {
      const std::size_t found = findings_.breaks.size() + findings_.twice.size();
      look_at(at);
      if (findings_.breaks.size() + findings_.twice.size() > found) run_begin_ = at;
    }
    return std::move(findings_);
  }

private:
  std::vector<std::size_t> places_to_look_at() const {
    const double least = shortest_clean_step * interval_s_;
    const double most = longest_clean_step * interval_s_;
    std::vector<std::size_t> places;
    for (std::size_t begin = 1; begin < stamps_.size(); begin += looked_at_once) {
      const std::size_t end = std::min(begin + looked_at_once, stamps_.size());
      if (!any_step_outside(stamps_.data(), begin, end, least, most)) continue;
      for (std::size_t i = begin; i < end; ++i) {
        const double step = stamps_[i] - stamps_[i - 1];
        if (step < least || step > most) places.push_back(i);
      }
    }
    const auto add = [&](std::size_t sample) {
      if (sample > 0 && sample < stamps_.size()) places.push_back(sample);
    };
    for (const std::size_t reboot : marks_.reboots) add(reboot);
    for (const Lost& lost : marks_.lost) add(lost.sample);
    std::sort(places.begin(), places.end());
    places.erase(std::unique(places.begin(), places.end()), places.end());
    return places;
  }

  void look_at(std::size_t at) {
    const double step = stamps_[at] - stamps_[at - 1];
    const double excess = step - interval_s_;
    const bool reboot = std::binary_search(marks_.reboots.begin(), marks_.reboots.end(), at);
    if (step < 0.0 || (step > day_s && step > 4.0 * interval_s_)) {
      findings_.breaks.push_back({.sample = at, .shift_s = excess, .restart = true});
      return;
    }
    const bool late = step > longest_clean_step * interval_s_;
    const Lost lost = lost_at(at);
    if (late && lost.malformed + lost.stamps > 0) {
      add_break_with_lost_rows(at, lost, excess, reboot);
    } else if (late && (reboot || lasting(at, 1.0))) {
      findings_.breaks.push_back({.sample = at, .gap_s = excess, .restart = reboot});
    } else if (reboot) {
      findings_.breaks.push_back({.sample = at, .restart = true});
    } else if (step < shortest_clean_step * interval_s_) {
      (lasting(at, -1.0) ? findings_.twice : findings_.close).push_back(at);
    }
  }

  void add_break_with_lost_rows(std::size_t at, const Lost& lost, double excess, bool reboot) {
    const auto rows = static_cast<double>(lost.malformed + lost.stamps);
    const double rest = excess - rows * interval_s_;
    const double per_row = std::min(interval_s_, excess / rows);
    findings_.breaks.push_back({.sample = at,
                                .gap_s = rest > jump_of_phase * interval_s_ ? rest : 0.0,
                                .malformed_s = per_row * static_cast<double>(lost.malformed),
                                .stamps_s = per_row * static_cast<double>(lost.stamps),
                                .restart = reboot});
  }

  bool lasting(std::size_t at, double sign) const {
    return sign * phase_change(stamps_, at, run_begin_, interval_s_) > jump_of_phase * interval_s_;
  }

  Lost lost_at(std::size_t at) const {
    Lost sum{at};
    auto lost = std::lower_bound(marks_.lost.begin(), marks_.lost.end(), at,
                                 [](const Lost& one, std::size_t i) { return one.sample < i; });
    for (; lost != marks_.lost.end() && lost->sample == at; ++lost) {
      sum.malformed += lost->malformed;
      sum.stamps += lost->stamps;
    }
    return sum;
  }

  const std::vector<double>& stamps_;
  const ClockMarks& marks_;
  double interval_s_;
  std::size_t run_begin_ = 0;  // phases are compared from here on
  Findings findings_;
};

bool could_be_rounding(const Break& one, double interval_s, double grid_s) {
  return !one.restart && one.malformed_s + one.stamps_s == 0.0 &&
         one.gap_s < grid_s + jump_of_phase * interval_s;
}

// Takes the small findings of [begin, end) back where they are what rounding makes of a clock that
// drifts against the grid: several of them, and all stamps near one line.
void acquit_drift(Findings& findings, const std::vector<double>& stamps, std::size_t begin,
                  std::size_t end, double interval_s, double grid_s) {
  const auto inside = [&](std::size_t sample) { return sample > begin && sample < end; };
  const auto small_gap = [&](const Break& one) {
    return inside(one.sample) && could_be_rounding(one, interval_s, grid_s);
  };
  const auto events = std::count_if(findings.breaks.begin(), findings.breaks.end(), small_gap) +
                      std::count_if(findings.twice.begin(), findings.twice.end(), inside);
  if (events < fewest_of_drift || fit_line(stamps, begin, end).range > range_of_drift * grid_s)
    return;
  findings.breaks.erase(std::remove_if(findings.breaks.begin(), findings.breaks.end(), small_gap),
                        findings.breaks.end());
  findings.twice.erase(std::remove_if(findings.twice.begin(), findings.twice.end(), inside),
                       findings.twice.end());
}

}  // namespace

Findings find_breaks(const std::vector<double>& stamps, const ClockMarks& marks, double interval_s,
                     double grid_s) {
  Findings findings = BreakFinder(stamps, marks, interval_s).find();
  if (grid_s < coarse_grid * interval_s) return findings;
  std::vector<Break> sure;
  std::copy_if(findings.breaks.begin(), findings.breaks.end(), std::back_inserter(sure),
               [&](const Break& one) { return !could_be_rounding(one, interval_s, grid_s); });
  std::size_t begin = 0;
  for (std::size_t i = 0; i <= sure.size(); ++i) {
    const std::size_t end = i < sure.size() ? sure[i].sample : stamps.size();
    acquit_drift(findings, stamps, begin, end, interval_s, grid_s);
    begin = end;
  }
  return findings;
}

double mean_clean_step(const std::vector<double>& stamps, const Findings& findings,
                       double otherwise) {
  double seconds = 0.0;
  double steps = -static_cast<double>(findings.twice.size());
  std::size_t begin = 0;
  const auto add = [&](std::size_t end) {
    seconds += stamps[end - 1] - stamps[begin];
    steps += static_cast<double>(end - 1 - begin);
    begin = end;
  };
  for (const Break& one : findings.breaks) add(one.sample);
  add(stamps.size());
  return steps > 0.0 && seconds > 0.0 ? seconds / steps : otherwise;
}

std::vector<std::size_t> samples_to_merge(const std::vector<double>& stamps,
                                          const std::vector<std::size_t>& close_or_twice,
                                          double reach_s) {
  std::vector<std::size_t> chosen;
  std::size_t anchor = 0;  // the sample that the run follows
  for (const std::size_t at : close_or_twice) {
    const bool goes_on = !chosen.empty() && chosen.back() + 1 == at;
    if (!goes_on) anchor = at - 1;
    if (stamps[at] - stamps[anchor] < reach_s) chosen.push_back(at);
  }
  return chosen;
}

}  // namespace clickwise::logs
