#include "clickwise/report/review_html.hpp"

#include <fmt/format.h>
#include <fmt/ranges.h>

#include "apparent_words.hpp"
#include "clickwise/core/units.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

using core::to_mm;

constexpr const char* style = R"(
:root { color-scheme: light dark; --ink: #1b1b1b; --paper: #fff; --line: #767676; --soft: #f0f0ee; }
@media (prefers-color-scheme: dark) {
  :root { --ink: #eee; --paper: #161616; --line: #8a8a8a; --soft: #262626; }
}
body { font: 16px/1.45 system-ui, sans-serif; color: var(--ink); background: var(--paper);
       margin: 0 auto; max-width: 76rem; padding: 1rem; }
h1 { font-size: 1rem; font-weight: 400; margin: 0 0 1rem; }
h2 { font-size: 1.15rem; margin: 2rem 0 .5rem; }
.turn { font-size: 1.6rem; line-height: 1.2; font-weight: 700; margin: 0 0 .5rem; }
.scroll { overflow-x: auto; }
table { border-collapse: collapse; font-variant-numeric: tabular-nums; width: 100%; }
th, td { padding: .25rem .45rem; text-align: right; border-bottom: 1px solid var(--line);
         white-space: nowrap; }
th:first-child, td:first-child { text-align: left; }
ul { padding-left: 1.2rem; }
section.first { background: var(--soft); padding: 1rem; border-left: .4rem solid var(--ink); }
@media print { section { break-inside: avoid; } }
)";

std::string escaped(std::string_view text) {
  std::string result;
  for (const char letter : text) {
    switch (letter) {
      case '&':
        result += "&amp;";
        break;
      case '<':
        result += "&lt;";
        break;
      case '>':
        result += "&gt;";
        break;
      case '"':
        result += "&quot;";
        break;
      case '\'':
        result += "&#39;";
        break;
      default:
        result += letter;
    }
  }
  return result;
}

std::string cells(const char* tag, const std::vector<std::string>& texts) {
  std::string row = "<tr>";
  for (const std::string& text : texts) row += fmt::format("<{0}>{1}</{0}>", tag, escaped(text));
  return row + "</tr>\n";
}

std::string table(const std::vector<std::string>& head,
                  const std::vector<std::vector<std::string>>& rows) {
  std::string html =
      "<div class=\"scroll\"><table><thead>" + cells("th", head) + "</thead><tbody>\n";
  for (const auto& row : rows) html += cells("td", row);
  return html + "</tbody></table></div>\n";
}

std::string list(const std::vector<std::string>& items) {
  std::string html = "<ul>\n";
  for (const std::string& item : items) html += "<li>" + escaped(item) + "</li>\n";
  return html + "</ul>\n";
}

std::string section(const std::string& heading, const std::string& body) {
  return body.empty() ? "" : "<section><h2>" + escaped(heading) + "</h2>\n" + body + "</section>\n";
}

std::string step_items(const advice::Step& step) {
  std::vector<std::string> items{"How sure: " + confidence_words(step.confidence),
                                 "Why: " + step.why};
  const std::vector<std::string> predicted = predictions_words(step.predicted);
  if (!predicted.empty()) items.push_back(fmt::format("Predicts {}", fmt::join(predicted, "; ")));
  return list(items);
}

std::string first_section(const advice::Advice& advice) {
  std::string html = "<section class=\"first\">\n";
  if (advice.steps.empty())
    html += "<p class=\"turn\">Leave it</p>\n<p>" + escaped(advice.leave_it) + ".</p>\n";
  for (std::size_t i = 0; i < advice.steps.size(); ++i) {
    html += i == 0
                ? "<p class=\"turn\">Turn " + escaped(step_words(advice.steps[i])) + "</p>\n"
                : "<p>Only after riding that: " + escaped(step_words(advice.steps[i])) + ".</p>\n";
    html += step_items(advice.steps[i]);
  }
  for (const advice::Handover& handover : advice.handovers)
    html += "<p>" + escaped(handover_words(handover)) + "</p>\n";
  for (const std::string& check : advice.checks)
    html += "<p>Check first: " + escaped(check) + ".</p>\n";
  for (const std::string& note : advice.notes) html += "<p>Note: " + escaped(note) + ".</p>\n";
  return html + "</section>\n";
}

std::vector<std::string> band_row(const char* direction, const bands::Band& band) {
  const double all_s = band.low_s + band.high_s;
  const auto work = [](const std::optional<double>& joules) {
    return joules ? fmt::format("{:.0f}", *joules) : "-";
  };
  return {direction,
          fmt::format("{:.0f}", to_mm(band.split_m_s)),
          fmt::format("{:.2f}", band.low_s),
          fmt::format("{:.2f}", band.high_s),
          fmt::format("{:.1f}", all_s > 0.0 ? 100.0 * band.high_s / all_s : 0.0),
          fmt::format("{:.1f}", band.low_m),
          fmt::format("{:.1f}", band.high_m),
          work(band.low_j),
          work(band.high_j),
          fmt::format("{:.0f}", to_mm(band.p50_m_s)),
          fmt::format("{:.0f}", to_mm(band.p95_m_s)),
          fmt::format("{:.0f}", to_mm(band.max_m_s))};
}

std::string adjuster_table(const workflow::EndReview& end) {
  std::vector<std::vector<std::string>> rows;
  for (const workflow::AdjusterReview& adjuster : end.adjusters)
    rows.push_back({std::string(bike::words(adjuster.range.adjuster)),
                    fmt::format("{} of {}", adjuster.range.setting, adjuster.range.clicks),
                    fmt::format("{:.1f}", adjuster.reach.low_j),
                    fmt::format("{:.1f}", 100.0 * adjuster.reach.low_share),
                    fmt::format("{:.1f}", adjuster.reach.high_j),
                    fmt::format("{:.1f}", 100.0 * adjuster.reach.high_share)});
  if (rows.empty()) return "";
  return "<h3>What one click moves</h3>\n" +
         table({"adjuster", "clicks out", "low-speed, J", "% of the work", "high-speed, J",
                "% of the work"},
               rows) +
         (end.damper_assumed ? "<p>The damper's curve is assumed, not measured: take these as an "
                               "order of size.</p>\n"
                             : "");
}

std::string apparent_section(const workflow::EndReview& end) {
  if (!end.apparent || !end.apparent->problem.empty()) return "";
  const ApparentTable words = apparent_table(*end.apparent);
  return "<h3>The damper as ridden</h3>\n" + table(words.head, words.rows) + list(words.sentences);
}

std::string bottom_out_table(const workflow::EndReview& end) {
  std::vector<std::vector<std::string>> rows;
  for (const run::EndStop& stop : end.bottom_outs)
    rows.push_back({fmt::format("{:.2f}", stop.t_s),
                    fmt::format("{:.0f}", to_mm(stop.closing_speed_m_s)),
                    fmt::format("{:.1f}", to_mm(stop.depth_m))});
  const std::string heading = fmt::format("<h3>Bottom-outs: {}</h3>\n", end.bottom_outs.size());
  return heading + (rows.empty() ? "" : table({"at, s", "met at, mm/s", "deep, mm"}, rows));
}

std::string travel_words(const workflow::EndReview& end) {
  if (!end.travel_withheld.empty()) return escaped("Of travel: " + end.travel_withheld + ".");
  return fmt::format("Travel: mean {:.1f}, p95 {:.1f}, most {:.1f} of {:.0f} mm.",
                     to_mm(end.travel.mean_m), to_mm(end.travel.p95_m), to_mm(end.travel.max_m),
                     to_mm(end.stroke_m));
}

std::string end_section(const workflow::EndReview& end) {
  const std::string body =
      table({"direction", "split, mm/s", "low, s", "high, s", "high, %", "low, m", "high, m",
             "low, J", "high, J", "p50, mm/s", "p95, mm/s", "max, mm/s"},
            {band_row("compression", end.bands.compression),
             band_row("rebound", end.bands.rebound)}) +
      fmt::format("<p>Split: compression {}, rebound {}. {} Velocity noise {:.1f} mm/s.</p>\n",
                  split_source_words(end.compression_split_source),
                  split_source_words(end.rebound_split_source), travel_words(end),
                  to_mm(end.velocity_noise_m_s)) +
      adjuster_table(end) + apparent_section(end) +
      (end.travel_withheld.empty() ? bottom_out_table(end) : "");
  return section(part_words(end.name, true), body);
}

std::string listed_section(const std::string& heading, const std::vector<std::string>& items) {
  return items.empty() ? "" : section(heading, list(items));
}

}  // namespace

std::string review_html(const workflow::Review& review) {
  const std::string title = fmt::format(
      "{} on {}", review.log.name, review.bike_name.empty() ? "an unnamed bike" : review.bike_name);
  std::string html =
      "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n"
      "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n<title>" +
      escaped(title) + "</title>\n<style>" + style + "</style>\n</head>\n<body>\n<main>\n<h1>" +
      escaped(title) +
      fmt::format(": {} of riding in {} logged</h1>\n", duration_words(review.log.riding_s),
                  duration_words(review.log.duration_s)) +
      first_section(review.advice);
  for (const workflow::EndReview& end : review.ends) html += end_section(end);
  html += listed_section("Vibration at the hands", hand_arm_words(review.hand_arm));
  html += listed_section("What the log was worth", fault_words(review.log.faults));
  html += listed_section("Notes", review.notes);
  html += listed_section("Left out, and what would bring it", review.missing);
  html += listed_section("Before you turn", advice::cautions());
  return html + "</main>\n</body>\n</html>\n";
}

}  // namespace clickwise::report
