#include "dyno_fit_words.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "clickwise/core/units.hpp"
#include "json_writer.hpp"

namespace clickwise::report {

namespace {

namespace json = boost::json;
using core::to_mm;
using damper::FittedParameter;
using damper::SideFit;

constexpr std::size_t most_misfits_shown = 10;

// From SI to the unit at the end of the parameter's name.
double to_named_unit(const FittedParameter& parameter, double value) {
  return parameter.name.ends_with("_mm_s") ? to_mm(value) : value;
}

std::string parameter_line(const FittedParameter& parameter) {
  const double value = to_named_unit(parameter, parameter.value);
  if (!parameter.known)
    return fmt::format("  {:<20} not known: {}; the curve goes on with {:.4g}\n", parameter.name,
                       parameter.why_not, value);
  return fmt::format("  {:<20} {:9.4g} +- {:.2g}\n", parameter.name, value,
                     to_named_unit(parameter, parameter.standard_error));
}

std::string misfit_lines(const std::vector<damper::Misfit>& misfits) {
  if (misfits.empty()) return {};
  std::string text =
      misfits.size() == 1
          ? "  1 point does not fit and was left out:\n"
          : fmt::format("  {} points do not fit and were left out:\n", misfits.size());
  for (std::size_t i = 0; i < std::min(misfits.size(), most_misfits_shown); ++i)
    text +=
        fmt::format("    line {}: {:.0f} mm/s, {:.1f} N; the curve says {:.1f} N ({:.0f} sigma)\n",
                    misfits[i].line, to_mm(misfits[i].velocity_m_s), misfits[i].force_n,
                    misfits[i].fitted_n, misfits[i].sigmas);
  if (misfits.size() > most_misfits_shown)
    text += fmt::format("    and {} more (all in the JSON)\n", misfits.size() - most_misfits_shown);
  return text;
}

std::string side_text(const SideFit& side, const char* direction) {
  std::string text = fmt::format(
      "Fit to the dyno, {}: {} points, {:.0f} to {:.0f} mm/s; off by {:.1f} N rms, "
      "{:.1f} % of the force; the curve itself is known to +-{:.1f} %\n",
      direction, side.points, to_mm(side.slowest_m_s), to_mm(side.fastest_m_s), side.rms_n,
      100.0 * side.rms_share, 100.0 * side.curve_error_share);
  for (const FittedParameter& parameter : side.parameters) text += parameter_line(parameter);
  text += misfit_lines(side.misfits);
  for (const std::string& note : side.notes) text += fmt::format("  note: {}\n", note);
  return text;
}

json::object side_json(const SideFit& side) {
  json::object parameters;
  for (const FittedParameter& one : side.parameters) {
    json::object object{{"value", number(to_named_unit(one, one.value))},
                        {"standard_error", number(to_named_unit(one, one.standard_error))},
                        {"known", one.known}};
    if (!one.known) object["why_not"] = json::string(one.why_not);
    parameters[one.name] = std::move(object);
  }
  json::array misfits;
  for (const damper::Misfit& misfit : side.misfits)
    misfits.push_back(json::object{{"line", misfit.line},
                                   {"velocity_mm_s", number(to_mm(misfit.velocity_m_s))},
                                   {"force_n", number(misfit.force_n)},
                                   {"fitted_n", number(misfit.fitted_n)},
                                   {"sigmas", number(misfit.sigmas)}});
  json::array notes;
  for (const std::string& note : side.notes) notes.emplace_back(note);
  return {{"points", side.points},
          {"slowest_mm_s", number(to_mm(side.slowest_m_s))},
          {"fastest_mm_s", number(to_mm(side.fastest_m_s))},
          {"residual_rms_n", number(side.rms_n)},
          {"residual_rms_share", number(side.rms_share)},
          {"curve_error_share", number(side.curve_error_share)},
          {"stopped_because", json::string(side.reason)},
          {"parameters", std::move(parameters)},
          {"misfits", std::move(misfits)},
          {"notes", std::move(notes)}};
}

}  // namespace

std::string dyno_fit_text(const damper::DynoFit& fit) {
  std::string text = fmt::format("\n{}\n{}", side_text(fit.compression, "compression"),
                                 side_text(fit.rebound, "rebound"));
  for (const std::string& note : fit.notes) text += fmt::format("note: {}\n", note);
  return text;
}

json::object dyno_fit_json(const damper::DynoFit& fit) {
  json::array notes;
  for (const std::string& note : fit.notes) notes.emplace_back(note);
  return {{"file", json::string(fit.file)},
          {"scatter_share", number(fit.scatter_share)},
          {"compression", side_json(fit.compression)},
          {"rebound", side_json(fit.rebound)},
          {"notes", std::move(notes)}};
}

}  // namespace clickwise::report
