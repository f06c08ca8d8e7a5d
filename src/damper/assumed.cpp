#include "assumed.hpp"

#include <cmath>
#include <numbers>

#include "clickwise/bike/spring.hpp"
#include "clickwise/core/units.hpp"
#include "sides.hpp"

namespace clickwise::damper {

namespace {

// The figures of this file are common practice, no source.
constexpr double rebound_over_compression = 2.0;  // of the equivalent damping coefficients
constexpr double reference_speed_m_s = 0.4;       // peak of the sine that the damping ratio is of

// A curve through (1, 1) in units of the reference speed and a reference force.
struct Shape {
  double knee_speed;
  double knee_force;
  double port;
};

Shape shape_of(bike::CurveShape shape) {
  switch (shape) {
    case bike::CurveShape::digressive:
      return {0.20, 0.60, 0.05};
    case bike::CurveShape::linear:
      return {0.10, 0.10, 0.02};
    case bike::CurveShape::progressive:
      return {0.95, 0.80, 0.15};
  }
  return {};
}

// The law through the knee and (1, 1), at the reference speed, for 1 N there.
Law unit_law(const Shape& shape) {
  const double F_p = 1.0 - shape.port;
  const double bleed_speed = shape.knee_speed * std::sqrt(F_p / shape.knee_force);
  const double v_0 = reference_speed_m_s;
  return {.bleed_m_s = v_0 * shape.knee_speed * std::sqrt(100.0 / shape.knee_force),
          .opening_n = shape.knee_force,
          .slope_n_s_m = (F_p - shape.knee_force) / (1.0 - bleed_speed) / v_0,
          .port_n_s2_m2 = shape.port / (v_0 * v_0)};
}

// c of equal energy over a sine of the reference peak speed V: 2 / (pi V) int_0^pi F(V sin a)
// sin a da.
double equivalent_damping(const Law& law) {
  constexpr int cells = 400;
  double sum = 0.0;
  for (int i = 0; i < cells; ++i) {
    const double sine = std::sin(std::numbers::pi * (i + 0.5) / cells);
    sum += law.force_n(reference_speed_m_s * sine) * sine;
  }
  return 2.0 * sum / cells / reference_speed_m_s;
}

// The law whose forces are `factor` times those of `law`.
Law scaled(const Law& law, double factor) {
  return {law.bleed_m_s / std::sqrt(factor), law.opening_n * factor, law.slope_n_s_m * factor,
          law.port_n_s2_m2 * factor};
}

// Ranges of the adjusters that give `law` at the present settings.
bike::HydraulicSide side_of(const Law& law, const std::optional<bike::Clicks>& bleed,
                            const std::optional<bike::Clicks>& valve) {
  bike::HydraulicSide side;
  side.slope_n_s_m = law.slope_n_s_m;
  side.port_n_s2_m2 = law.port_n_s2_m2;
  side.fixed_bleed_m_s = law.bleed_m_s;
  side.fixed_valve_n = law.opening_n;
  if (bleed) {
    side.bleed = plausible_bleed(law.bleed_m_s, *bleed);
    side.fixed_bleed_m_s.reset();
  }
  if (valve) {
    side.valve = plausible_valve(law.opening_n, *valve);
    side.fixed_valve_n.reset();
  }
  return side;
}

// Critical damping at the shaft, at sag: 2 r sqrt(k m) for a shaft spring k under a wheel mass m.
double critical_damping_at_shaft(const bike::End& end, double sprung_mass_kg) {
  const double sag_m =
      bike::equilibrium_travel_m(end, sprung_mass_kg * core::standard_gravity_m_s2);
  const double k = bike::spring_rate_n_m(*end.spring, sag_m, end.stroke_m);
  return end.ratio(sag_m) * bike::critical_damping_n_s_m(k, sprung_mass_kg);
}

}  // namespace

bike::HydraulicDamper laid_out(const bike::AssumedDamper& assumed, const bike::End& end,
                               double sprung_mass_kg, const core::Place& place) {
  const double critical = critical_damping_at_shaft(end, sprung_mass_kg);
  if (!(critical > 0.0))
    throw core::JobError(place,
                         "an assumed damper is scaled by the spring's rate at sag, which is 0",
                         "check the spring's points and the masses");
  const Law unit = unit_law(shape_of(assumed.shape));
  const double mean = assumed.damping_ratio * critical / equivalent_damping(unit);
  const double compression = 2.0 * mean / (1.0 + rebound_over_compression);
  return {side_of(scaled(unit, compression), assumed.bleed_compression, assumed.valve_compression),
          side_of(scaled(unit, compression * rebound_over_compression), assumed.bleed_rebound,
                  assumed.valve_rebound)};
}

}  // namespace clickwise::damper
