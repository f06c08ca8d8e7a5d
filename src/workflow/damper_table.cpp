#include "clickwise/workflow/damper_table.hpp"

#include "clickwise/bike/bike_file.hpp"
#include "end_review.hpp"

namespace clickwise::workflow {

DamperReport damper_report(const std::string& bike_path) {
  const bike::Bike bike = bike::read_bike_file(bike_path);
  DamperReport report{bike.name, {}};
  for (const bike::EndName name : bike::both_ends) {
    if (!bike.end(name)) continue;
    if (const auto damper = damper_of(bike, name))
      report.ends.push_back({name, damper::effect_table(*damper, damper::usual_speeds_m_s())});
  }
  if (report.ends.empty())
    throw core::JobError({bike_path}, "no end of this bike has a damper",
                         "add a [front.damper] or [rear.damper] table");
  return report;
}

}  // namespace clickwise::workflow
