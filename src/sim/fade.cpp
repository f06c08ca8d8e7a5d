#include "fade.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::sim {

namespace {

constexpr std::size_t fewest_windows = 12;
constexpr double least_rows = 20.0;  // of a window
constexpr double normal_95 = 1.6448536269514722, normal_995 = 2.5758293035489004;
constexpr double most_correlation = 0.7;  // of neighbouring windows; more is the line itself

// Sums over one block, for its own damping share and offset.
struct WindowSums {
  double rows = 0.0, t = 0.0, d = 0.0, dd = 0.0, z = 0.0, dz = 0.0;

  double information() const { return dd - d * d / rows; }
  double share() const { return (dz - d * z / rows) / information(); }
};

struct Windows {
  std::vector<double> t_s, share, weight;
};

double damper_part(const ApparentFit& fit, const ApparentRow& row) {
  double force = 0.0;
  for (const auto& [knot, weight] : row.hats)
    force += fit.theta[first_knot_index + static_cast<Eigen::Index>(knot)] * weight;
  return force;
}

Windows windows_of(const SprungRide& ride, std::span<const double> felt_m_s2,
                   const ApparentSamples& samples, const Knots& knots, const ApparentFit& fit) {
  std::vector<WindowSums> sums(static_cast<std::size_t>(samples.blocks));
  each_row(ride, felt_m_s2, samples, knots, [&](const ApparentRow& row) {
    WindowSums& of = sums[static_cast<std::size_t>(row.block)];
    const double d = damper_part(fit, row);
    const double z = fit.residual_n(row) + d;
    of.rows += 1.0;
    of.t += static_cast<double>(row.first) * ride.interval_s;
    of.d += d;
    of.dd += d * d;
    of.z += z;
    of.dz += d * z;
  });
  Windows windows;
  for (const WindowSums& one : sums) {
    if (one.rows < least_rows || !(one.information() > 0.0)) continue;
    windows.t_s.push_back(one.t / one.rows);
    windows.share.push_back(one.share());
    windows.weight.push_back(one.information());
  }
  return windows;
}

// The weighted line through the windows; its slope's variance by leaving windows out (HC3:
// MacKinnon and White, J. Econometrics 29:305-325, 1985), widened where neighbours err alike.
struct Line {
  double middle_s = 0.0, level = 0.0, slope_1_s = 0.0, deviation_1_s = 0.0;
};

Line fit_line(const Windows& windows) {
  const std::size_t n = windows.t_s.size();
  double w = 0.0, wt = 0.0, ws = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    w += windows.weight[i];
    wt += windows.weight[i] * windows.t_s[i];
    ws += windows.weight[i] * windows.share[i];
  }
  Line line{wt / w, ws / w, 0.0, 0.0};
  double tt = 0.0, ts = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    const double t = windows.t_s[i] - line.middle_s;
    tt += windows.weight[i] * t * t;
    ts += windows.weight[i] * t * windows.share[i];
  }
  line.slope_1_s = ts / tt;
  double variance = 0.0, lagged = 0.0, squares = 0.0, before = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    const double t = windows.t_s[i] - line.middle_s;
    const double error = windows.share[i] - line.level - line.slope_1_s * t;
    const double leverage = windows.weight[i] * (1.0 / w + t * t / tt);
    variance += std::pow(windows.weight[i] * t * error / (1.0 - std::min(leverage, 0.9)), 2);
    lagged += error * before;
    squares += error * error;
    before = error;
  }
  const double correlation =
      squares > 0.0 ? std::clamp(lagged / squares, 0.0, most_correlation) : 0.0;
  line.deviation_1_s = std::sqrt(variance * (1.0 + correlation) / (1.0 - correlation)) / tt;
  return line;
}

}  // namespace

std::optional<Fade> find_fade(const SprungRide& ride, std::span<const double> felt_m_s2,
                              const ApparentSamples& samples, const Knots& knots,
                              const ApparentFit& fit, const ApparentOptions& options) {
  const Windows windows = windows_of(ride, felt_m_s2, samples, knots, fit);
  if (windows.t_s.size() < fewest_windows) return std::nullopt;
  const Line line = fit_line(windows);
  const double before_s = line.middle_s - windows.t_s.front();
  const double after_s = windows.t_s.back() - line.middle_s;
  const double start = line.level - line.slope_1_s * before_s;
  if (!(start > 0.0)) return std::nullopt;
  // end / start - 1 and its derivative to the slope
  const double change = line.slope_1_s * (before_s + after_s) / start;
  const double deviation = line.deviation_1_s * (before_s + after_s) * line.level / (start * start);
  const double degrees = static_cast<double>(windows.t_s.size() - 2);
  const double half = student_quantile(normal_95, degrees) * deviation;
  Fade fade{{change, change - half, change + half}, false, {}};
  fade.clear = std::abs(change) >= options.least_fade &&
               std::abs(change) > student_quantile(normal_995, degrees) * deviation;
  for (std::size_t i = 0; i < windows.t_s.size(); ++i)
    fade.windows.push_back({windows.t_s[i], windows.share[i]});
  return fade;
}

}  // namespace clickwise::sim
