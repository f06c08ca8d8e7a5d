// The hydraulic law of a damper: bleed beside a preloaded valve, in series with fixed ports.
#pragma once

#include <optional>

namespace clickwise::damper {

// One direction at one setting. Speeds and forces are magnitudes (>= 0) in SI.
//
//   bleed alone   v_b(F) = B sqrt(F / 100)
//   valve         v_v(F) = max(0, F - F_o) / S
//   both          v = v_b(F_p) + v_v(F_p)                                            (1)
//   whole         F = F_p + P v^2                                                     (2)
//
// Contract section 3. (1) is solved in closed form: below the knee F_p = 100 (v / B)^2; above it
// s = sqrt(F_p) is the positive root of s^2 / S + (B / 10) s - (F_o / S + v) = 0.
struct Law {
  double bleed_m_s = 0.0;     // B; 0: no bleed, a platform: no motion below F_o
  double opening_n = 0.0;     // F_o
  double slope_n_s_m = 0.0;   // S; 0: no valve (it never opens)
  double port_n_s2_m2 = 0.0;  // P

  bool has_valve() const { return slope_n_s_m > 0.0; }

  // The speed at which F_p = F_o; 0 without a bleed; infinite without a valve. (m/s)
  double knee_m_s() const;

  // Force at a speed >= 0 (m/s to N). At v = 0 without a bleed: F_o, the force that starts motion.
  double force_n(double speed_m_s) const;

  // dF/dv at a speed >= 0; the side above the knee at the knee itself. (N s/m)
  double slope_at(double speed_m_s) const;

  // Inverse of force_n for force >= 0; 0 below a platform's opening force. (N to m/s)
  double speed_m_s(double force_n) const;
};

// Both directions at one setting.
struct Curve {
  Law compression;
  Law rebound;
  bool assumed = false;         // nobody measured it
  double scatter_share = 0.05;  // relative, of the forces; Damper::scatter_share

  // Signed: positive velocity (compression) gives positive force. 0 at v = 0.
  double force_n(double velocity_m_s) const;
};

}  // namespace clickwise::damper
