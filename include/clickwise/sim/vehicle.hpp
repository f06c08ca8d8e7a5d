// One end of the bike as two masses over a ground: the model that rides and replays share.
#pragma once

#include "clickwise/bike/bike.hpp"
#include "clickwise/damper/law.hpp"
#include "clickwise/sim/wheel_table.hpp"

namespace clickwise::sim {

// Heights count upwards from level ground under a wheel that just touches it; the end is at full
// extension when sprung and wheel heights are equal:
//
//   z = z_w - z_s                wheel travel; shaft travel x(z), ratio r = dz/dx
//   F_w = (F_spring + F_bumper + F_stop + F_damper(v) + F_c sign(v)) / r,  v = ż / r     (1)
//   F_t = max(0, k_t (y - z_w) + c_t (ẏ - ż_w)) where y > z_w, else 0 (airborne)         (2)
//   m_s z̈_s = F_w - m_s g,   m_u z̈_w = F_t - F_w - m_u g                                (3)
//
// The shaft line stands upright: fork angle, pitch and the coupling of the two ends are left out.
// Metal ends of the stroke: F_stop = k d max(0, 1 + χ ḋ) over the penetration d (a contact whose
// loss vanishes as it opens, so that it never pulls).

// Contact with the metal at full extension and at full stroke, at the shaft.
struct EndStopContact {
  double stiffness_n_m = 4e6;
  double loss_s_m = 0.5;  // χ

  // Force against penetration for depth > 0, closing speed positive.
  double force_n(double depth_m, double closing_m_s) const;
};

struct VehicleEnd {
  double sprung_mass_kg = 0.0;
  double unsprung_mass_kg = 0.0;
  double stroke_m = 0.0;
  double friction_n = 0.0;  // F_c
  bike::Tyre tyre;
  damper::Curve curve;
  EndStopContact stop;
  WheelTable table;  // spring and bumper over the linkage

  // Throws core::JobError, naming the missing keys, when the end is absent or has no spring,
  // damper, unsprung mass or share of the sprung mass. The tyre defaults to bike::Tyre.
  static VehicleEnd from(const bike::Bike& bike, bike::EndName name);
};

struct EndState {
  double sprung_m = 0.0;
  double sprung_m_s = 0.0;
  double wheel_m = 0.0;
  double wheel_m_s = 0.0;
};

// Shaft quantities at the state that a step ended in; forces as they acted during the step, at the
// shaft, positive resisting compression. The tyre's acts on the wheel, upwards, never negative.
struct EndOutput {
  double travel_m = 0.0;
  double velocity_m_s = 0.0;
  double tyre_n = 0.0;
  double spring_n = 0.0;
  double stop_n = 0.0;
  double damper_n = 0.0;    // without friction
  double friction_n = 0.0;  // up to F_c either way; while v = 0, what holds the shaft still
  double felt_m_s2 = 0.0;   // specific force of the sprung mass, z̈_s + g = F_w / m_s
};

struct Ground {
  double height_m = 0.0;
  double rate_m_s = 0.0;  // ẏ under the moving wheel
};

// One semi-implicit step of (3): velocities from the forces at the old positions, with damper and
// friction taken at the new velocity (so that stiff bleeds, platforms and sticking need no
// regularisation), then positions from the new velocities. First order in the step; stable to
// about 0.25 ms for a bike's wheel masses, tyres and stops (the limit is 2 sqrt(m_u / k_stop)).
EndOutput step(const VehicleEnd& end, EndState& state, const Ground& ground, double step_s);

// At rest over level ground of this height: sprung weight on the spring, all weight on the tyre,
// friction left out.
EndState at_rest(const VehicleEnd& end, double ground_m);

// Kinetic, gravitational, spring, stop and tyre energy, J, zero for masses at height 0 and springs
// unloaded at full extension.
double stored_j(const VehicleEnd& end, const EndState& state, double ground_m);

// The speed v >= 0 with v + gain F(v) = drive, for gain > 0 (m/s per N) and drive >= 0 (m/s): the
// implicit step's equation. With s = sqrt(F_p), b = B / 10 and the law (1), (2) of damper/law.hpp:
//
//   g(s) = gain s^2 + v(s) + gain P v(s)^2 - drive = 0,   v(s) = b s + max(0, s^2 - F_o) / S
//
// g is rising and convex: the root without the port is closed form and lies above, and Newton's
// rule comes down to the root. Relative error below 1e-9.
double implicit_speed_m_s(const damper::Law& law, double gain, double drive_m_s);

}  // namespace clickwise::sim
