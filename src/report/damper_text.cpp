#include "clickwise/report/damper_text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "clickwise/core/units.hpp"
#include "dyno_fit_words.hpp"
#include "json_writer.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

namespace json = boost::json;
using core::to_mm;

std::string change(const std::vector<double>& change_n, std::size_t i) {
  return change_n.empty() ? fmt::format("{:>8}", "end") : fmt::format("{:+8.1f}", change_n[i]);
}

std::string knee_words(double knee_m_s) {
  return std::isfinite(knee_m_s) ? fmt::format("knee at {:.0f} mm/s", to_mm(knee_m_s))
                                 : "no valve opens, so no knee";
}

void write_direction(std::string& text, const damper::EffectTable& table, bool compression) {
  std::string head = fmt::format("  {:>8} {:>9}", "mm/s", "N");
  std::vector<const damper::ClickEffect*> shown;
  for (const damper::ClickEffect& click : table.clicks) {
    if (bike::acts_in_compression(click.range.adjuster) != compression) continue;
    shown.push_back(&click);
    head += fmt::format(
        "   {:>17}",
        fmt::format("{} {}/{}", bike::is_bleed(click.range.adjuster) ? "low-speed" : "high-speed",
                    click.range.setting, click.range.clicks));
  }
  text += fmt::format("\n{}: {}\n{}\n", compression ? "Compression" : "Rebound",
                      knee_words(compression ? table.compression_knee_m_s : table.rebound_knee_m_s),
                      head);
  if (!shown.empty()) {
    text += fmt::format("  {:>8} {:>9}", "", "");
    for (std::size_t k = 0; k < shown.size(); ++k) text += "     firmer   softer";
    text += '\n';
  }
  const std::vector<double>& force_n = compression ? table.compression_n : table.rebound_n;
  for (std::size_t i = 0; i < table.speed_m_s.size(); ++i) {
    text += fmt::format("  {:8.0f} {:9.1f}", to_mm(table.speed_m_s[i]), force_n[i]);
    for (const damper::ClickEffect* click : shown)
      text += fmt::format("   {} {}", change(click->firmer_n, i), change(click->softer_n, i));
    text += '\n';
  }
}

// Force at a few speeds across each adjuster, the others as they are.
void write_family(std::string& text, const damper::Family& family,
                  const std::vector<double>& speed_m_s) {
  text += fmt::format("\nAcross {}, clicks out, N (* now{}):\n  {:>8}",
                      bike::words(family.range.adjuster),
                      family.range.assumed ? "; the range is assumed" : "", "mm/s");
  for (const damper::FamilyCurve& curve : family.curves)
    text += fmt::format("{:>9}{}", curve.setting, curve.present ? '*' : ' ');
  text += '\n';
  for (const double shown_m_s : {0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 3.0}) {
    const auto i = static_cast<std::size_t>(
        std::lower_bound(speed_m_s.begin(), speed_m_s.end(), shown_m_s - 1e-9) - speed_m_s.begin());
    text += fmt::format("  {:8.0f}", to_mm(shown_m_s));
    for (const damper::FamilyCurve& curve : family.curves)
      text += fmt::format("{:9.1f} ", curve.force_n[i]);
    text.back() = '\n';
  }
}

json::object family_json(const damper::Family& family) {
  json::array curves;
  for (const damper::FamilyCurve& curve : family.curves)
    curves.push_back(json::object{{"setting", curve.setting},
                                  {"present", curve.present},
                                  {"force_n", numbers(curve.force_n)}});
  return {{"clicks", family.range.clicks},
          {"assumed", family.range.assumed},
          {"curves", std::move(curves)}};
}

json::object click_json(const damper::ClickEffect& click) {
  json::object object{{"setting", click.range.setting}, {"clicks", click.range.clicks}};
  if (!click.firmer_n.empty()) object["firmer_n"] = numbers(click.firmer_n);
  if (!click.softer_n.empty()) object["softer_n"] = numbers(click.softer_n);
  return object;
}

json::object end_json(const workflow::EndDamper& end, const std::vector<double>& family_speed_m_s) {
  const damper::EffectTable& table = end.table;
  json::object adjusters;
  for (const damper::ClickEffect& click : table.clicks)
    adjusters[bike::to_string(click.range.adjuster)] = click_json(click);
  json::object families;
  for (const damper::Family& family : end.families)
    families[bike::to_string(family.range.adjuster)] = family_json(family);
  json::object object{{"assumed", table.assumed},
                      {"speed_mm_s", numbers(table.speed_m_s, 1.0 / core::metres_per_mm)},
                      {"compression_n", numbers(table.compression_n)},
                      {"rebound_n", numbers(table.rebound_n)},
                      {"knee_mm_s",
                       {{"compression", number(to_mm(table.compression_knee_m_s))},
                        {"rebound", number(to_mm(table.rebound_knee_m_s))}}},
                      {"adjusters", std::move(adjusters)},
                      {"scatter_share", number(end.scatter_share)},
                      {"families",
                       {{"speed_mm_s", numbers(family_speed_m_s, 1.0 / core::metres_per_mm)},
                        {"adjusters", std::move(families)}}}};
  if (end.fit) object["fit"] = dyno_fit_json(*end.fit);
  return object;
}

}  // namespace

std::string damper_text(const workflow::DamperReport& report) {
  std::string text;
  for (const workflow::EndDamper& end : report.ends) {
    text += fmt::format("{}{} of {}: force at the shaft, and what one click changes, N\n",
                        text.empty() ? "" : "\n", part_words(end.name, true),
                        report.bike_name.empty() ? "an unnamed bike" : report.bike_name);
    if (end.table.assumed)
      text += "The curve is assumed from a damping ratio, not measured: an order of size.\n";
    write_direction(text, end.table, true);
    write_direction(text, end.table, false);
    for (const damper::Family& family : end.families)
      write_family(text, family, report.family_speed_m_s);
    if (end.fit) text += dyno_fit_text(*end.fit);
  }
  return text;
}

std::string damper_json(const workflow::DamperReport& report) {
  json::object ends;
  for (const workflow::EndDamper& end : report.ends)
    ends[bike::to_string(end.name)] = end_json(end, report.family_speed_m_s);
  return to_text(json::object{{"schema", "clickwise-damper-1"},
                              {"bike", json::string(report.bike_name)},
                              {"ends", std::move(ends)}});
}

}  // namespace clickwise::report
