#include "yardstick.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/units.hpp"

namespace clickwise::advice {

namespace {

double per_minute(long count, const sim::EndFigures& figures) {
  return 60.0 * static_cast<double>(count) / figures.seconds;
}

long hard_count(const sim::EndFigures& figures, double split_m_s) {
  return std::count_if(
      figures.bottom_outs.begin(), figures.bottom_outs.end(),
      [&](const run::EndStop& stop) { return stop.closing_speed_m_s > split_m_s; });
}

}  // namespace

double modelled_value(SymptomKind kind, const sim::EndFigures& figures,
                      const damper::Law& compression, const EndRide& ride) {
  const double percent_of_stroke = 100.0 / ride.end->stroke_m;
  const long hard = hard_count(figures, ride.compression_split_m_s);
  switch (kind) {
    case SymptomKind::hard_bottoming:
      return per_minute(hard, figures);
    case SymptomKind::slow_bottoming:
      return per_minute(static_cast<long>(figures.bottom_outs.size()) - hard, figures);
    case SymptomKind::rides_deep:
    case SymptomKind::rides_high:
      return percent_of_stroke * figures.travel_mean_m;
    case SymptomKind::unused_travel:
      return percent_of_stroke * figures.travel_max_m;
    case SymptomKind::returns_too_fast:
      return per_minute(static_cast<long>(figures.top_outs.size()), figures);
    case SymptomKind::harsh:
      return compression.force_n(figures.bands[0].p95_m_s) /
             (*ride.sprung_mass_kg * core::standard_gravity_m_s2 * ride.end->ratio(0.0));
    case SymptomKind::held_by_platform:
      return 100.0 * figures.still_s / figures.seconds;
    case SymptomKind::packs_down:
    case SymptomKind::wallows:
      break;
  }
  return std::numeric_limits<double>::quiet_NaN();
}

double severity_at(const Symptom& symptom, double value) {
  return std::max(0.0, symptom.sign * (value - symptom.aim) / symptom.error);
}

}  // namespace clickwise::advice
