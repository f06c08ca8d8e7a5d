// What the `damper` command tells: each end's curve and what its clicks change.
#pragma once

#include <string>
#include <vector>

#include "clickwise/damper/effect.hpp"

namespace clickwise::workflow {

struct EndDamper {
  bike::EndName name = bike::EndName::front;
  damper::EffectTable table;
};

struct DamperReport {
  std::string bike_name;
  std::vector<EndDamper> ends;  // those that have a damper
};

// Throws core::InputError for a bike file that cannot be read, core::JobError when no end of it has
// a damper, or one that cannot be laid out.
DamperReport damper_report(const std::string& bike_path);

}  // namespace clickwise::workflow
