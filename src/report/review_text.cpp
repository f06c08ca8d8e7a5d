#include "clickwise/report/review_text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <iterator>
#include <string_view>
#include <utility>

#include "apparent_words.hpp"
#include "clickwise/core/units.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

using core::to_mm;
using Out = std::back_insert_iterator<std::string>;

class Writer {
public:
  explicit Writer(const TextStyle& style) : style_(style) {}

  template <typename... Args>
  void line(fmt::format_string<Args...> format, Args&&... args) {
    fmt::format_to(Out(text_), format, std::forward<Args>(args)...);
    while (!text_.empty() && text_.back() == ' ') text_.pop_back();
    text_ += '\n';
  }

  // Behind a label, broken between words so that a line stays within 96 columns.
  void item(std::string_view label, std::string_view words) {
    constexpr std::size_t width = 96;
    std::string row(label);
    bool bare = true;
    while (!words.empty()) {
      const std::size_t space = std::min(words.find(' '), words.size());
      if (!bare && row.size() + 1 + space > width) {
        text_ += row + '\n';
        row.assign(label.size(), ' ');
        bare = true;
      }
      if (!bare) row += ' ';
      row += words.substr(0, space);
      bare = false;
      words.remove_prefix(std::min(space + 1, words.size()));
    }
    text_ += row + '\n';
  }

  void blank() { text_ += '\n'; }

  void heading(const std::string& words) {
    blank();
    text_ += style_.emphasis ? "\x1b[1m" + words + "\x1b[0m\n" : words + "\n";
  }

  std::string take() { return std::move(text_); }

private:
  TextStyle style_;
  std::string text_;
};

void write_head(Writer& out, const workflow::Review& review) {
  const workflow::LogSummary& log = review.log;
  out.line("{} on {}: {} of riding in {} logged, {:.4g} Hz", log.name,
           review.bike_name.empty() ? "an unnamed bike" : review.bike_name,
           duration_words(log.riding_s), duration_words(log.duration_s), log.rate_hz);
}

void write_advice(Writer& out, const advice::Advice& advice) {
  if (advice.steps.empty()) {
    out.heading("Leave it: " + advice.leave_it + ".");
  } else {
    out.heading("Turn " + step_words(advice.steps.front()) + ".");
    for (std::size_t i = 0; i < advice.steps.size(); ++i) {
      const advice::Step& step = advice.steps[i];
      if (i > 0) out.line("Only after riding that: {}.", step_words(step));
      out.line("  how sure  {}", confidence_words(step.confidence));
      out.item("  why       ", step.why);
      const char* label = "  predicts  ";
      for (const std::string& words : predictions_words(step.predicted))
        out.item(std::exchange(label, "            "), words);
    }
  }
  for (const advice::Handover& handover : advice.handovers) out.item("", handover_words(handover));
  for (const std::string& check : advice.checks) out.item("", "Check first: " + check + ".");
  for (const std::string& note : advice.notes) out.item("", "Note: " + note + ".");
}

std::string speed(double m_s) {
  return std::isfinite(m_s) ? fmt::format("{:6.0f}", to_mm(m_s)) : fmt::format("{:>6}", "-");
}

std::string joules(const std::optional<double>& work_j) {
  return work_j ? fmt::format("{:8.0f}", *work_j) : fmt::format("{:>8}", "-");
}

void write_band(Writer& out, const std::string& direction, const bands::Band& band) {
  const double all_s = band.low_s + band.high_s;
  const double share = all_s > 0.0 ? 100.0 * band.high_s / all_s : 0.0;
  out.line("  {:<11} {:6.0f}  {:8.2f} {:8.2f} {:5.1f}%  {:7.1f} {:7.1f}  {} {}  {} {} {}",
           direction, to_mm(band.split_m_s), band.low_s, band.high_s, share, band.low_m,
           band.high_m, joules(band.low_j), joules(band.high_j), speed(band.p50_m_s),
           speed(band.p95_m_s), speed(band.max_m_s));
}

void write_bands(Writer& out, const workflow::EndReview& end) {
  out.line("  {:<11} {:>6}  {:^24}  {:^15}  {:^17}  {:^20}", "", "split", "time, s", "way, m",
           "work, J", "speed, mm/s");
  out.line("  {:<11} {:>6}  {:>8} {:>8} {:>6}  {:>7} {:>7}  {:>8} {:>8}  {:>6} {:>6} {:>6}",
           "direction", "mm/s", "low", "high", "share", "low", "high", "low", "high", "p50", "p95",
           "max");
  write_band(out, "compression", end.bands.compression);
  write_band(out, "rebound", end.bands.rebound);
  const std::string compression = split_source_words(end.compression_split_source);
  const std::string rebound = split_source_words(end.rebound_split_source);
  if (compression == rebound)
    out.line("  split: {}", compression);
  else
    out.line("  split: compression {}, rebound {}", compression, rebound);
}

void write_travel(Writer& out, const workflow::EndReview& end) {
  out.line("  travel: mean {:.1f}, p50 {:.1f}, p95 {:.1f}, most {:.1f} of {:.0f} mm",
           to_mm(end.travel.mean_m), to_mm(end.travel.p50_m), to_mm(end.travel.p95_m),
           to_mm(end.travel.max_m), to_mm(end.stroke_m));
}

void write_events(Writer& out, const workflow::EndReview& end) {
  out.line("  bottom-outs {}, top-outs {}, hit trains {}", end.bottom_outs.size(),
           end.top_outs.size(), end.trains.size());
  constexpr std::size_t most_shown = 12;
  for (std::size_t i = 0; i < end.bottom_outs.size() && i < most_shown; ++i) {
    const run::EndStop& stop = end.bottom_outs[i];
    out.line("    bottom-out at {:8.2f} s: met at {:5.0f} mm/s, {:.1f} mm deep, {}", stop.t_s,
             to_mm(stop.closing_speed_m_s), to_mm(stop.depth_m),
             stop.closing_speed_m_s > end.bands.compression.split_m_s ? "hard" : "slow");
  }
  if (end.bottom_outs.size() > most_shown)
    out.line("    and {} more: all are in the JSON", end.bottom_outs.size() - most_shown);
}

void write_adjusters(Writer& out, const workflow::EndReview& end) {
  if (end.adjusters.empty()) return;
  out.line("  {:<24} {:>7}   {}", "one click of", "now", "moves, in the bands of its direction");
  for (const workflow::AdjusterReview& adjuster : end.adjusters) {
    const damper::Reach& reach = adjuster.reach;
    out.line(
        "  {:<24} {:>3}/{:<3}   low-speed {:6.1f} J ({:4.1f} %), high-speed {:6.1f} J ({:4.1f} %)",
        bike::words(adjuster.range.adjuster), adjuster.range.setting, adjuster.range.clicks,
        reach.low_j, 100.0 * reach.low_share, reach.high_j, 100.0 * reach.high_share);
  }
  if (end.damper_assumed)
    out.line("  the damper's curve is assumed, not measured: take these as an order of size");
}

void write_list(Writer& out, const std::string& heading, const std::vector<std::string>& lines) {
  if (lines.empty()) return;
  out.heading(heading);
  for (const std::string& words : lines) out.line("  {}", words);
}

}  // namespace

std::string review_text(const workflow::Review& review, const TextStyle& style) {
  Writer out(style);
  write_head(out, review);
  write_advice(out, review.advice);
  for (const workflow::EndReview& end : review.ends) {
    out.heading(fmt::format("{}, {:.0f} mm ({} of riding, velocity noise {:.1f} mm/s)",
                            part_words(end.name, true), to_mm(end.stroke_m),
                            duration_words(end.riding_s), to_mm(end.velocity_noise_m_s)));
    if (!(end.riding_s > 0.0)) {
      out.line("  no usable reading: the faults and notes below say why");
      continue;
    }
    write_bands(out, end);
    if (end.travel_withheld.empty()) {
      write_travel(out, end);
      write_events(out, end);
    } else {
      out.line("  {}", end.travel_withheld);
      out.line("  so no bottom-outs, top-outs and hit trains are counted");
    }
    write_adjusters(out, end);
    if (end.apparent)
      for (const std::string& words : apparent_words(*end.apparent)) out.line("  {}", words);
  }
  if (review.front_rear) {
    out.heading("Front beside rear");
    out.line("  mean travel: front {:+.1f} % of stroke against the rear",
             100.0 * review.front_rear->mean_travel_difference);
    out.line(
        "  p95 speed at the wheel, front over rear: compression {:.2f}, rebound {:.2f}; "
        "in the air {} times",
        review.front_rear->compression_p95_ratio, review.front_rear->rebound_p95_ratio,
        review.airtimes.size());
  }
  write_list(out, "Vibration at the hands", hand_arm_words(review.hand_arm));
  write_list(out, "What the log was worth", fault_words(review.log.faults));
  write_list(out, "Notes", review.notes);
  write_list(out, "Left out, and what would bring it", review.missing);
  if (!review.advice.steps.empty() || !review.advice.handovers.empty())
    write_list(out, "Before you turn", advice::cautions());
  return out.take();
}

}  // namespace clickwise::report
