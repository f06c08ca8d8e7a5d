// The units of the program: SI inside (m, m/s, N, kg, s, J, Pa); trade units only at the edges.
#pragma once

namespace clickwise::core {

// Multiply by these to come in, divide to go out.
inline constexpr double metres_per_mm = 1e-3;
inline constexpr double cubic_metres_per_mm3 = 1e-9;
inline constexpr double pascals_per_kpa = 1e3;
inline constexpr double seconds_per_ms = 1e-3;
inline constexpr double seconds_per_us = 1e-6;
inline constexpr double metres_per_second_per_km_h = 1.0 / 3.6;

// NIST SP 811 (2008), appendix B.9: exact (pound, inch, standard gravity) or as printed (psi).
inline constexpr double kilograms_per_pound = 0.45359237;
inline constexpr double metres_per_inch = 0.0254;
inline constexpr double standard_gravity_m_s2 = 9.80665;  // 3rd CGPM 1901
inline constexpr double newtons_per_pound_force = kilograms_per_pound * standard_gravity_m_s2;
inline constexpr double pascals_per_psi =
    newtons_per_pound_force / (metres_per_inch * metres_per_inch);
inline constexpr double newtons_per_metre_per_lb_in = newtons_per_pound_force / metres_per_inch;

inline constexpr double radians_per_degree = 0.017453292519943295;

inline constexpr double standard_atmosphere_pa = 101325.0;  // 10th CGPM 1954

constexpr double from_mm(double mm) {
  return mm * metres_per_mm;
}
constexpr double to_mm(double metres) {
  return metres / metres_per_mm;
}

}  // namespace clickwise::core
