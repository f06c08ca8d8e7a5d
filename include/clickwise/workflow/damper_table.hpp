// What the `damper` command tells: each end's curve and what its clicks change.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "clickwise/damper/effect.hpp"

namespace clickwise::workflow {

struct EndDamper {
  bike::EndName name = bike::EndName::front;
  damper::EffectTable table;
  std::vector<damper::Family> families;  // at family_speed_m_s
  std::optional<damper::DynoFit> fit;    // of a dyno table
  double scatter_share = 0.0;            // Damper::scatter_share
};

struct DamperReport {
  std::string bike_name;
  std::vector<EndDamper> ends;           // those that have a damper
  std::vector<double> family_speed_m_s;  // 0 to 3 m/s, even
};

// Throws core::InputError for a bike file that cannot be read, core::JobError when no end of it has
// a damper, or one that cannot be laid out.
DamperReport damper_report(const std::string& bike_path);

}  // namespace clickwise::workflow
