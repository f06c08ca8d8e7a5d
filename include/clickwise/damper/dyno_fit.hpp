// The hydraulic law fitted to a dyno table: parameters, what they are worth, what stays unknown.
// Equations 16 to 19 of docs/method/damper.md.
#pragma once

#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::damper {

struct DynoFitOptions {
  double noise_share = 0.02;         // of the force: what a point is known to; 0.001 to 0.5
  double noise_floor_n = 1.0;        // beside it, N; 1e-3 to 100
  double misfit_sigmas = 4.0;        // a point further off does not fit; 2 to 20
  double port_needs_m_s = 0.8;       // no port is told from points slower than this; 0 to 10
  double most_standard_error = 0.5;  // of a parameter, relative: beyond it, it is not known

  // Throws std::invalid_argument "name = value; must be ...".
  void validate() const;
};

// One parameter of one direction, SI. Where it is not known, `value` is what the law goes on with:
// a plausible figure, or one that the points allow among others.
struct FittedParameter {
  std::string name;  // as the bike file's key: "bleed.closed_mm_s", "valve.fixed_n", "port.n_s2_m2"
  double value = 0.0;
  double standard_error = 0.0;  // NaN where not known
  bool known = true;
  std::string why_not;  // empty where known
};

// A point that the law does not pass.
struct Misfit {
  int line = 0;  // of the table
  double velocity_m_s = 0.0;
  double force_n = 0.0;   // measured
  double fitted_n = 0.0;  // the law's
  double sigmas = 0.0;    // their difference by the points' own scatter, magnitude
};

struct SideFit {
  std::vector<FittedParameter> parameters;
  std::size_t points = 0;    // in this direction, misfits among them
  double slowest_m_s = 0.0;  // of the points, magnitudes
  double fastest_m_s = 0.0;
  double rms_n = 0.0;              // of the residuals; misfits apart
  double rms_share = 0.0;          // sqrt(sum w r^2 / sum w F^2), w by the noise; misfits apart
  double curve_error_share = 0.0;  // median relative standard error of the law at the points
  std::vector<Misfit> misfits;
  std::vector<std::string> notes;  // sentences
  bool bleed_clicks_known = true;  // what the clicks move was measured, or there are none
  bool valve_clicks_known = true;
  std::string reason;  // why the search stopped
};

struct DynoFit {
  std::string file;
  SideFit compression;
  SideFit rebound;
  std::vector<std::string> notes;  // of the table as a whole
  bike::HydraulicDamper sides;     // the law, at the present settings
  double scatter_share = 0.0;      // relative, of a force that the law gives; >= 0.02
};

// Fits both directions over all click settings at once: bounded least squares of residuals by
// noise, several starts, points that do not fit set aside (robust scale). Errors, 3 x 3 settings
// with 12 speeds to 3 m/s and 2 % noise: the curve 0.3 %, the port 7 %, the rest 3 % (docs/method).
// Cost: some ms a hundred points. Throws core::JobError at `place` when a direction has no points,
// or fewer than it has parameters, or the search does not end.
DynoFit fit_dyno(const bike::DynoDamper& table, const core::Place& place,
                 const DynoFitOptions& options = {});

}  // namespace clickwise::damper
