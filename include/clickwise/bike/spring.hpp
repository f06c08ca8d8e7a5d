// The spring of an end: force, rate, energy and where it balances a load.
//
// Travel is held to [0, stroke]: past the stroke stands metal and above full extension the top-out
// stop, and neither is the spring's business. NaN in gives NaN out.
#pragma once

#include "clickwise/bike/bike.hpp"

namespace clickwise::bike {

// Spring and bumper at a shaft travel, N at the shaft (contract section 3):
//   coil    F = k (x_0 + x)                                                           (1)
//   air     F = A ((p + p_atm) (V / (V - A x))^n - p_atm)                             (2)
//   table   straight between the points
//   bumper  F_e ((x - (stroke - l)) / l)^2 over the last l of the stroke, added        (3)
double spring_force_n(const Spring& spring, double travel_m, double stroke_m);

// dF/dx there, N/m; of a table the piece that begins at a point.
double spring_rate_n_m(const Spring& spring, double travel_m, double stroke_m);

// Integral of the force from full extension to the travel, J. (2) in closed form, n = 1 included.
double spring_energy_j(const Spring& spring, double travel_m, double stroke_m);

// Travel at which the spring carries a wheel load: F(x) = load r(x) (virtual work). 0 when it is
// topped out by its preload, the stroke when it cannot carry the load. `end` must have a spring.
double equilibrium_travel_m(const End& end, double wheel_load_n);

// Wheel travel at a shaft travel: the integral of the ratio from full extension. Beyond [0, stroke]
// the ratio goes straight on.
double wheel_travel_m(const End& end, double shaft_travel_m);

// Rate at the wheel, d(F/r)/dz = (k - F r'/r) / r^2: k / r^2 where the ratio is constant. Needs a
// spring.
double wheel_rate_n_m(const End& end, double shaft_travel_m);

// sqrt(k / m) / (2 pi); critical damping 2 sqrt(k m); two springs one after the other.
double natural_frequency_hz(double rate_n_m, double mass_kg);
double critical_damping_n_s_m(double rate_n_m, double mass_kg);
double rate_in_series_n_m(double first_n_m, double second_n_m);

}  // namespace clickwise::bike
