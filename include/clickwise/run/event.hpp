// Things that happen in a ride, on the time base of its motion.
#pragma once

namespace clickwise::run {

// An excursion to one end of the stroke.
struct EndStop {
  double t_s = 0.0;                // moment of the crossing
  double depth_m = 0.0;            // largest travel of the excursion (top-out: smallest)
  double closing_speed_m_s = 0.0;  // shaft velocity at the crossing: positive into the stop for a
                                   // bottom-out, negative (rebound) for a top-out
  double energy_left_j = 0.0;      // kinetic energy of the sprung share at the crossing; 0 when
                                   // the masses are not known
};

// Both ends near full extension: [begin_s, end_s).
struct Airtime {
  double begin_s = 0.0;
  double end_s = 0.0;
};

// Compressions that follow each other faster than the end can recover.
struct HitTrain {
  double begin_s = 0.0;
  double end_s = 0.0;
  int hits = 0;
  double first_start_m = 0.0;      // travel where the first hit began
  double climb_m_per_hit = 0.0;    // slope of the start travel over the hits; > 0: packs down
};

}  // namespace clickwise::run
