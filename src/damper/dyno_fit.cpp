#include "clickwise/damper/dyno_fit.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <stdexcept>

#include "clickwise/core/statistics.hpp"
#include "side_fit.hpp"
#include "sides.hpp"

namespace clickwise::damper {

namespace {

using bike::Adjuster;
using Eigen::Index;

constexpr double least_scatter_share = 0.02;  // no dyno and no damper repeats itself better
constexpr double many_misfits = 0.2;
constexpr double poor_rms_over_noise = 3.0;

// One direction of the table, and what becomes of it.
struct Direction {
  bool compression = true;
  std::optional<bike::Clicks> bleed;
  std::optional<bike::Clicks> valve;
  std::vector<SidePoint> points;

  Adjuster bleed_name() const {
    return compression ? Adjuster::low_speed_compression : Adjuster::low_speed_rebound;
  }
  Adjuster valve_name() const {
    return compression ? Adjuster::high_speed_compression : Adjuster::high_speed_rebound;
  }
  const char* words() const { return compression ? "compression" : "rebound"; }
};

double share_out(const bike::DynoPoint& point, Adjuster adjuster,
                 const std::optional<bike::Clicks>& clicks) {
  const double setting = point.setting[static_cast<std::size_t>(adjuster)];
  return clicks && !std::isnan(setting) ? setting / clicks->clicks : 0.0;
}

Direction direction_of(const bike::DynoDamper& table, bool compression) {
  Direction direction;
  direction.compression = compression;
  direction.bleed = table.counted(direction.bleed_name());
  direction.valve = table.counted(direction.valve_name());
  const double sign = compression ? 1.0 : -1.0;
  for (const bike::DynoPoint& point : table.points) {
    if (!(sign * point.velocity_m_s > 0.0)) continue;
    direction.points.push_back({sign * point.velocity_m_s, sign * point.force_n,
                                share_out(point, direction.bleed_name(), direction.bleed),
                                share_out(point, direction.valve_name(), direction.valve),
                                point.line});
  }
  return direction;
}

void check_enough(const Direction& direction, const bike::DynoDamper& table,
                  const core::Place& place) {
  if (direction.points.empty())
    throw core::JobError(
        place, fmt::format("{} has no {} points", table.file, direction.words()),
        fmt::format("measure {} too (velocity and force {}), or describe the damper with kind = "
                    "\"assumed\"",
                    direction.words(), direction.compression ? "positive" : "negative"));
  const Index parameters = layout_of(direction.points, true).size;
  if (static_cast<Index>(direction.points.size()) <= parameters)
    throw core::JobError(place,
                         fmt::format("{} has {} {} points for {} parameters", table.file,
                                     direction.points.size(), direction.words(), parameters),
                         "measure at more speeds, from 20 mm/s to 2 m/s if the dyno can");
}

// Turns estimates into parameters, with the reason where one is not known. `unseen` is the reason
// when no point reaches the parameter's part of the law; null otherwise.
class Parameters {
public:
  Parameters(const FittedSide& side, double most_error, SideFit& fit)
      : side_(side), most_error_(most_error), fit_(fit) {}

  double add(const char* name, const std::vector<Index>& which, const char* unseen) {
    const Estimate found = estimate(side_.found, which);
    FittedParameter parameter{name, found.value, found.standard_error, true, {}};
    if (unseen)
      parameter.why_not = unseen;
    else if (found.at_bound)
      parameter.why_not = "at the limit of what it can be: the points show none";
    else if (std::isnan(found.standard_error))
      parameter.why_not = "the points allow any value";
    else if (found.standard_error > most_error_ * std::abs(found.value))
      parameter.why_not =
          fmt::format("its standard error is {:.0f} % of it",
                      std::min(999.0, 100.0 * found.standard_error / std::abs(found.value)));
    parameter.known = parameter.why_not.empty();
    if (!parameter.known) parameter.standard_error = std::numeric_limits<double>::quiet_NaN();
    fit_.parameters.push_back(parameter);
    return found.value;
  }

  void add_plausible(const char* name, double value, std::string why_not) {
    fit_.parameters.push_back(
        {name, value, std::numeric_limits<double>::quiet_NaN(), false, std::move(why_not)});
  }

private:
  const FittedSide& side_;
  double most_error_;
  SideFit& fit_;
};

constexpr const char* too_slow = "no point is fast enough to open the valve";
constexpr const char* too_fast = "no point is slow enough for the bleed alone";
constexpr const char* seen_well = nullptr;

// The clicks of an adjuster that stood still on the dyno: its range is plausible, not measured.
void note_one_setting(Adjuster adjuster, SideFit& fit) {
  fit.notes.push_back(
      fmt::format("{} was measured at one setting only, which does not tell what its clicks move: "
                  "a usual range is assumed. Measure at its ends and in the middle.",
                  bike::words(adjuster)));
}

// An adjuster that was turned, and nothing came of it.
void note_no_effect(Adjuster adjuster, SideFit& fit) {
  fit.notes.push_back(
      fmt::format("the points show no effect of {}: check that its column holds what was set",
                  bike::words(adjuster)));
}

void lay_bleed(const Direction& direction, const FittedSide& side, Parameters& parameters,
               bike::HydraulicSide& law, SideFit& fit, const char* unseen) {
  const SideLayout& at = side.layout;
  if (at.bleed_span >= 0) {
    law.bleed = *direction.bleed;
    law.bleed->closed = parameters.add("bleed.closed_mm_s", {at.bleed}, unseen);
    law.bleed->open = parameters.add("bleed.open_mm_s", {at.bleed, at.bleed_span}, unseen);
    if (!unseen && estimate(side.found, {at.bleed_span}).at_bound)
      note_no_effect(direction.bleed_name(), fit);
    return;
  }
  const double now_m_s = parameters.add("bleed.fixed_mm_s", {at.bleed}, unseen);
  if (!direction.bleed) {
    law.fixed_bleed_m_s = now_m_s;
    return;
  }
  law.bleed = plausible_bleed(now_m_s, *direction.bleed);
  fit.bleed_clicks_known = false;
  note_one_setting(direction.bleed_name(), fit);
}

void lay_valve(const Direction& direction, const FittedSide& side, Parameters& parameters,
               bike::HydraulicSide& law, SideFit& fit, const char* unseen) {
  const SideLayout& at = side.layout;
  if (at.valve_span >= 0) {
    law.valve = *direction.valve;
    law.valve->closed = parameters.add("valve.closed_n", {at.valve, at.valve_span}, unseen);
    law.valve->open = parameters.add("valve.open_n", {at.valve}, unseen);
    if (!unseen && estimate(side.found, {at.valve_span}).at_bound)
      note_no_effect(direction.valve_name(), fit);
  } else {
    const double now_n = parameters.add("valve.fixed_n", {at.valve}, unseen);
    if (direction.valve) {
      law.valve = plausible_valve(now_n, *direction.valve);
      fit.valve_clicks_known = false;
      note_one_setting(direction.valve_name(), fit);
    } else {
      law.fixed_valve_n = now_n;
    }
  }
  law.slope_n_s_m = parameters.add("valve.slope_n_s_m", {at.slope}, unseen);
}

bike::HydraulicSide lay_out(const Direction& direction, const FittedSide& side,
                            const DynoFitOptions& options, SideFit& fit) {
  bike::HydraulicSide law;
  const Seen seen = seen_by(direction.points, side.layout, side.found.parameters);
  Parameters parameters(side, options.most_standard_error, fit);
  lay_bleed(direction, side, parameters, law, fit, seen.bleed ? seen_well : too_fast);
  lay_valve(direction, side, parameters, law, fit, seen.valve ? seen_well : too_slow);
  if (side.layout.port >= 0) {
    law.port_n_s2_m2 = parameters.add("port.n_s2_m2", {side.layout.port}, seen_well);
    return law;
  }
  law.port_n_s2_m2 = side.layout.fixed_port_n_s2_m2;
  parameters.add_plausible("port.n_s2_m2", law.port_n_s2_m2,
                           fmt::format("no point is faster than {:.1f} m/s; a usual one is assumed",
                                       options.port_needs_m_s));
  return law;
}

void take_residuals(const Direction& direction, const FittedSide& side, SideFit& fit) {
  const double sign = direction.compression ? 1.0 : -1.0;
  std::vector<double> errors;
  double squares = 0.0, weighted = 0.0, forces = 0.0, count = 0.0;
  for (std::size_t i = 0; i < direction.points.size(); ++i) {
    const SidePoint& point = direction.points[i];
    const double sigmas = side.residual_n[i] / side.sigma_n[i];
    const double law_n = point.force_n + side.residual_n[i];
    if (!side.fits[i]) {
      fit.misfits.push_back({point.line, sign * point.speed_m_s, sign * point.force_n, sign * law_n,
                             std::abs(sigmas) / side.scale[i]});
      continue;
    }
    squares += side.residual_n[i] * side.residual_n[i];
    weighted += sigmas * sigmas;
    forces += law_n * law_n / (side.sigma_n[i] * side.sigma_n[i]);
    count += 1.0;
    if (law_n > 0.0) errors.push_back(force_error_n(side, point) / law_n);
  }
  fit.rms_n = std::sqrt(squares / count);
  fit.rms_share = forces > 0.0 ? std::sqrt(weighted / forces) : 0.0;
  if (!errors.empty()) fit.curve_error_share = core::median(std::move(errors));
}

double typical_sigmas(const FittedSide& side) {
  std::vector<double> sizes;
  for (std::size_t i = 0; i < side.residual_n.size(); ++i)
    sizes.push_back(std::abs(side.residual_n[i]) / side.sigma_n[i]);
  return core::median(std::move(sizes));
}

// Whether the points lie much nearer to a law that takes an adjuster's clicks the other way round.
void note_reversed(Direction direction, double SidePoint::*out, Adjuster adjuster,
                   double typical_now, const DynoFitOptions& options, SideFit& fit) {
  constexpr double much_nearer = 0.5;
  for (SidePoint& point : direction.points) point.*out = 1.0 - point.*out;
  if (typical_sigmas(fit_side(direction.points, options)) > much_nearer * typical_now) return;
  fit.notes.push_back(
      fmt::format("{} looks counted the wrong way round: its column must count clicks out from "
                  "closed (0 = firmest)",
                  bike::words(adjuster)));
}

void note_quality(const Direction& direction, const FittedSide& side, const DynoFitOptions& options,
                  SideFit& fit) {
  const bool poor = fit.rms_share > poor_rms_over_noise * options.noise_share;
  const bool many =
      static_cast<double>(fit.misfits.size()) > many_misfits * static_cast<double>(fit.points);
  if (poor)
    fit.notes.push_back(
        fmt::format("the law misses these points by {:.0f} % of the force: they scatter, or the "
                    "damper does not flow as the law says (friction, cavitation, heat, gas force)",
                    100.0 * fit.rms_share));
  if (many)
    fit.notes.push_back("many points do not fit: check that their settings are written right");
  if (!poor && !many) return;
  const double now = typical_sigmas(side);
  if (side.layout.bleed_span >= 0)
    note_reversed(direction, &SidePoint::bleed_out, direction.bleed_name(), now, options, fit);
  if (side.layout.valve_span >= 0)
    note_reversed(direction, &SidePoint::valve_out, direction.valve_name(), now, options, fit);
}

SideFit fit_direction(const Direction& direction, const DynoFitOptions& options,
                      const core::Place& place, bike::HydraulicSide& law) {
  const FittedSide side = fit_side(direction.points, options);
  if (!side.found.parameters.allFinite() || !std::isfinite(side.found.residual_sum_of_squares))
    throw core::JobError(
        place,
        fmt::format("the {} points could not be fitted: {}", direction.words(), side.found.reason),
        "check the table for points that are far off");
  SideFit fit;
  fit.points = direction.points.size();
  const auto [slowest, fastest] = std::minmax_element(
      direction.points.begin(), direction.points.end(),
      [](const SidePoint& a, const SidePoint& b) { return a.speed_m_s < b.speed_m_s; });
  fit.slowest_m_s = slowest->speed_m_s;
  fit.fastest_m_s = fastest->speed_m_s;
  fit.reason = side.found.reason;
  law = lay_out(direction, side, options, fit);
  take_residuals(direction, side, fit);
  note_quality(direction, side, options, fit);
  return fit;
}

void check(const char* name, double value, double least, double most) {
  if (!(value >= least && value <= most))
    throw std::invalid_argument(fmt::format("{} = {}; must be {} to {}", name, value, least, most));
}

}  // namespace

void DynoFitOptions::validate() const {
  check("noise_share", noise_share, 0.001, 0.5);
  check("noise_floor_n", noise_floor_n, 1e-3, 100.0);
  check("misfit_sigmas", misfit_sigmas, 2.0, 20.0);
  check("port_needs_m_s", port_needs_m_s, 0.0, 10.0);
  check("most_standard_error", most_standard_error, 0.01, 10.0);
}

DynoFit fit_dyno(const bike::DynoDamper& table, const core::Place& place,
                 const DynoFitOptions& options) {
  options.validate();
  const Direction compression = direction_of(table, true);
  const Direction rebound = direction_of(table, false);
  check_enough(compression, table, place);
  check_enough(rebound, table, place);
  DynoFit fit;
  fit.file = table.file;
  fit.notes = table.notes;
  fit.compression = fit_direction(compression, options, place, fit.sides.compression);
  fit.rebound = fit_direction(rebound, options, place, fit.sides.rebound);
  fit.scatter_share =
      std::max({least_scatter_share,
                std::hypot(fit.compression.rms_share, fit.compression.curve_error_share),
                std::hypot(fit.rebound.rms_share, fit.rebound.curve_error_share)});
  return fit;
}

}  // namespace clickwise::damper
