// Settings to try in a replay: `--set front.low_speed_compression=4` and the like.
#pragma once

#include <string>
#include <vector>

#include "clickwise/bike/bike.hpp"

namespace clickwise::workflow {

// One thing that was changed, in the units of its name.
struct ChangedSetting {
  std::string name;  // "front.low_speed_compression", "front.spring.pressure_kpa"
  double from = 0.0;
  double to = 0.0;
};

// Changes the bike as asked, each text "NAME=VALUE". Names: END.ADJUSTER (clicks out, within the
// adjuster's range) and, in the units of the bike file, END.spring.{rate_n_mm, rate_lb_in,
// preload_mm, pressure_kpa, pressure_psi, volume_mm3}, END.spring.bumper.{length_mm, end_force_n},
// END.{friction_n, unsprung_mass_kg}, END.tyre.{stiffness_n_mm, damping_n_s_m}, rider.mass_kg,
// rider.mass_lb. The same name twice is refused. Throws core::InputError for a name that this bike
// does not have (with the nearest one it has) or a value out of its range.
std::vector<ChangedSetting> apply_settings(bike::Bike& bike, const std::vector<std::string>& texts);

}  // namespace clickwise::workflow
