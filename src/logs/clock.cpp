#include "clickwise/logs/clock.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

#include "clickwise/core/errors.hpp"
#include "clock_breaks.hpp"
#include "clock_steps.hpp"

namespace clickwise::logs {

namespace {

constexpr double closest_samples = 0.1;   // intervals
constexpr std::size_t shortest_line = 8;  // samples

class ClockBuilder {
public:
  ClockBuilder(ClockReadings readings, const std::string& path)
      : path_(path), stamps_(std::move(readings.ticks)) {
    marks_.reboots = std::move(readings.reboots);
    column_ = std::move(readings.column);
    seconds_per_tick_ = readings.seconds_per_tick;
    time_of_day_ = readings.time_of_day;
    for (const LostRows& rows : readings.lost) marks_.lost.push_back({rows.sample, rows.count, 0});
  }

  Clock build() {
    drop_unreadable();
    read_ticks();
    settle_interval();
    check_direction();
    count_faults();
    join_restarts();
    merge_close_samples();
    lay_stretches();
    make_strict();
    note_drops();
    clock_.t_s = std::move(stamps_);
    return std::move(clock_);
  }

private:
  [[noreturn]] void refuse(const std::string& wrong, const std::string& remedy) const {
    throw core::JobError({path_}, wrong, remedy);
  }

  void require_three() const {
    if (stamps_.size() < 3)
      refuse("the time column \"" + column_ + "\" has too few readable stamps for a clock (" +
                 std::to_string(stamps_.size()) + ")",
             "check that the bike file names the right column, and that the log is whole");
  }

  void drop_unreadable() {
    std::vector<std::size_t> unreadable;
    for (std::size_t i = 0; i < stamps_.size(); ++i)
      if (std::isnan(stamps_[i])) unreadable.push_back(i);
    leave_out(unreadable);
    require_three();
  }

  // Ticks to seconds from the first, wraps undone, stamps that are no stamps left out.
  void read_ticks() {
    for (std::size_t i = 1; i < stamps_.size(); ++i)
      clock_.repeated_stamps += stamps_[i] == stamps_[i - 1];
    const double grid = stamp_grid(stamps_) * seconds_per_tick_;
    clock_.resolution_s = grid;
    clock_.wraps = undo_wraps(stamps_, seconds_per_tick_, time_of_day_, rough_interval(stamps_));
    if (clock_.wraps > 0)
      clock_.notes.push_back("the counter of the time column overflowed " +
                             std::to_string(clock_.wraps) + " times; the overflows are undone");
    const double first = stamps_.front();
    for (double& stamp : stamps_) stamp = (stamp - first) * seconds_per_tick_;
    interval_s_ = rough_interval(stamps_);
    if (!(interval_s_ > 0.0))
      refuse("the time column \"" + column_ + "\" does not advance",
             "name the column that holds the time in [log]");
    leave_out(stray_stamps(stamps_, interval_s_, marks_.reboots));
    require_three();
    if (grid >= 1.5 * interval_s_) {
      spread_equal_stamps(stamps_, 0, stamps_.size(), interval_s_, grid);
      clock_.notes.push_back("the clock ticks once in several samples; they are spread evenly");
    }
  }

  void settle_interval() {
    for (int round = 0; round < 2; ++round) {
      findings_ = find_breaks(stamps_, marks_, interval_s_, clock_.resolution_s);
      interval_s_ = mean_clean_step(stamps_, findings_, interval_s_);
    }
    findings_ = find_breaks(stamps_, marks_, interval_s_, clock_.resolution_s);
    clock_.interval_s = interval_s_;
  }

  void check_direction() const {
    std::size_t back = 0;
    for (const Break& one : findings_.breaks) back += one.restart && one.shift_s < 0.0;
    if (back > 3 && back * 20 > stamps_.size())
      refuse("the time column \"" + column_ + "\" runs backwards " + std::to_string(back) +
                 " times in " + std::to_string(stamps_.size()) + " samples",
             "name the column that holds the time in [log]");
  }

  void count_faults() {
    double stamps_s = 0.0;
    bool clock_set = false;
    for (const Break& one : findings_.breaks) {
      if (one.restart) clock_.faults.add(run::FaultKind::time_restart, "", 1, 0.0);
      clock_set = clock_set || one.shift_s > 0.0;
      if (one.gap_s > 0.0) clock_.faults.add(run::FaultKind::gap, "", 1, one.gap_s);
      clock_.longest_gap_s = std::max(clock_.longest_gap_s, one.gap_s);
      clock_.malformed_s += one.malformed_s;
      stamps_s += one.stamps_s;
    }
    const auto dropped = static_cast<long long>(clock_.dropped.size());
    clock_.faults.add(run::FaultKind::missing, column_, dropped, stamps_s);
    if (clock_set)
      clock_.notes.push_back(
          "the clock was set forward by more than a day in mid-log; time goes on behind it");
  }

  void join_restarts() {
    double shift = 0.0;
    auto next = findings_.breaks.begin();
    const bool needed = std::any_of(next, findings_.breaks.end(),
                                    [](const Break& one) { return one.shift_s != 0.0; });
    for (std::size_t i = 0; needed && i < stamps_.size(); ++i) {
      for (; next != findings_.breaks.end() && next->sample == i; ++next) shift += next->shift_s;
      stamps_[i] -= shift;
    }
  }

  void merge_close_samples() {
    std::vector<std::size_t> merged = findings_.twice;
    if (clock_.resolution_s < 0.25 * interval_s_)
      merged.insert(merged.end(), findings_.close.begin(), findings_.close.end());
    if (merged.empty()) return;
    std::sort(merged.begin(), merged.end());
    const std::vector<std::size_t> chosen =
        samples_to_merge(stamps_, merged, closest_samples * interval_s_);
    if (chosen.empty()) return;
    merge(chosen);
    clock_.faults.add(run::FaultKind::missing, column_, static_cast<long long>(chosen.size()), 0.0);
    clock_.notes.push_back(std::to_string(chosen.size()) +
                           " samples stand at the time of the sample before; they are merged");
  }

  void merge(const std::vector<std::size_t>& samples) {
    const std::size_t before = clock_.dropped.size();
    leave_out(samples);
    for (std::size_t i = before; i < clock_.dropped.size(); ++i) clock_.dropped[i].merged = true;
    for (Break& one : findings_.breaks)
      one.sample -= static_cast<std::size_t>(
          std::lower_bound(samples.begin(), samples.end(), one.sample) - samples.begin());
  }

  void lay_stretches() {
    std::size_t begin = 0;
    for (const Break& one : findings_.breaks) {
      clock_.stretches.push_back({begin, one.sample});
      begin = one.sample;
    }
    clock_.stretches.push_back({begin, stamps_.size()});
    const double grid = clock_.resolution_s;
    if (grid <= 0.01 * interval_s_) return;
    for (const run::Stretch& stretch : clock_.stretches)
      if (!take_as_line(stretch, grid))
        spread_equal_stamps(stamps_, stretch.begin, stretch.end, interval_s_, grid);
  }

  // Puts stamps on their line if they keep within 3/4 of a grid step of it.
  bool take_as_line(const run::Stretch& stretch, double grid) {
    if (stretch.end - stretch.begin < shortest_line) return false;
    const StampLine line = fit_line(stamps_, stretch.begin, stretch.end);
    if (line.step <= 0.0 || line.range > 1.5 * grid) return false;
    for (std::size_t i = stretch.begin; i < stretch.end; ++i)
      stamps_[i] = line.start + line.step * static_cast<double>(i - stretch.begin);
    return true;
  }

  // Rounding of stamps may leave a stretch beginning in front of the end of the one before.
  void make_strict() {
    const double first = stamps_.front();
    double shift = 0.0;
    std::size_t stretch = 0;
    for (std::size_t i = 0; i < stamps_.size(); ++i) {
      stamps_[i] += shift - first;
      if (i == 0) continue;
      const bool starts =
          stretch + 1 < clock_.stretches.size() && clock_.stretches[stretch + 1].begin == i;
      stretch += starts;
      if (stamps_[i] > stamps_[i - 1]) continue;
      const double wanted = stamps_[i - 1] + (starts ? interval_s_ : 1e-3 * interval_s_);
      if (starts) shift += wanted - stamps_[i];
      stamps_[i] = wanted;
    }
  }

  // Takes samples (in order, in the present numbering) out; they count as lost stamps.
  void leave_out(const std::vector<std::size_t>& samples) {
    if (samples.empty()) return;
    if (origin_.empty()) {
      origin_.resize(stamps_.size());
      std::iota(origin_.begin(), origin_.end(), std::size_t{0});
    }
    const auto moved = [&](std::size_t sample) {
      const auto gone = std::lower_bound(samples.begin(), samples.end(), sample) - samples.begin();
      return sample - static_cast<std::size_t>(gone);
    };
    for (Lost& lost : marks_.lost) lost.sample = moved(lost.sample);
    for (std::size_t& reboot : marks_.reboots) reboot = moved(reboot);
    for (const std::size_t sample : samples) {
      clock_.dropped.push_back({origin_[sample], false});
      add_lost_stamp(moved(sample));
    }
    std::sort(marks_.lost.begin(), marks_.lost.end(),
              [](const Lost& a, const Lost& b) { return a.sample < b.sample; });
    std::size_t kept = 0;
    auto next = samples.begin();
    for (std::size_t i = 0; i < stamps_.size(); ++i) {
      if (next != samples.end() && *next == i) {
        ++next;
        continue;
      }
      stamps_[kept] = stamps_[i];
      origin_[kept++] = origin_[i];
    }
    stamps_.resize(kept);
    origin_.resize(kept);
  }

  void add_lost_stamp(std::size_t sample) {
    if (!marks_.lost.empty() && marks_.lost.back().sample == sample &&
        marks_.lost.back().malformed == 0)
      ++marks_.lost.back().stamps;
    else
      marks_.lost.push_back({sample, 0, 1});
  }

  void note_drops() {
    std::sort(clock_.dropped.begin(), clock_.dropped.end(),
              [](const Dropped& a, const Dropped& b) { return a.sample < b.sample; });
  }

  const std::string& path_;
  std::vector<double> stamps_;  // ticks first, then seconds
  ClockMarks marks_;
  std::vector<std::size_t> origin_;  // number of each sample in the readings; empty: unchanged
  std::string column_;
  double seconds_per_tick_ = 1.0;
  bool time_of_day_ = false;
  double interval_s_ = 0.0;
  Findings findings_;
  Clock clock_;
};

}  // namespace

Clock lay_clock(ClockReadings readings, const std::string& path) {
  return ClockBuilder(std::move(readings), path).build();
}

Clock uniform_clock(std::size_t samples, double rate_hz, const std::vector<std::size_t>& reboots) {
  Clock clock;
  clock.interval_s = 1.0 / rate_hz;
  clock.t_s.resize(samples);
  for (std::size_t i = 0; i < samples; ++i) clock.t_s[i] = static_cast<double>(i) / rate_hz;
  std::size_t begin = 0;
  for (const std::size_t reboot : reboots) {
    if (reboot == begin || reboot >= samples) continue;
    clock.faults.add(run::FaultKind::time_restart, "", 1, 0.0);
    clock.stretches.push_back({begin, reboot});
    begin = reboot;
  }
  if (samples > begin) clock.stretches.push_back({begin, samples});
  return clock;
}

}  // namespace clickwise::logs
