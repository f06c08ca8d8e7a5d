#include "clickwise/workflow/damper_table.hpp"

#include "clickwise/bike/bike_file.hpp"
#include "end_review.hpp"

namespace clickwise::workflow {

namespace {

std::vector<double> even_speeds_m_s() {
  constexpr int cells_per_m_s = 40;
  std::vector<double> speeds;
  for (int i = 0; i <= 3 * cells_per_m_s; ++i)
    speeds.push_back(static_cast<double>(i) / cells_per_m_s);
  return speeds;
}

EndDamper end_damper(bike::EndName name, const damper::Damper& damper,
                     const std::vector<double>& family_speeds_m_s) {
  EndDamper end;
  end.name = name;
  end.table = damper::effect_table(damper, damper::usual_speeds_m_s());
  end.families = damper::families(damper, family_speeds_m_s);
  if (damper.fit()) end.fit = *damper.fit();
  end.scatter_share = damper.scatter_share();
  return end;
}

}  // namespace

DamperReport damper_report(const std::string& bike_path) {
  const bike::Bike bike = bike::read_bike_file(bike_path);
  DamperReport report{bike.name, {}, even_speeds_m_s()};
  for (const bike::EndName name : bike::both_ends) {
    if (!bike.end(name)) continue;
    if (const auto damper = damper_of(bike, name))
      report.ends.push_back(end_damper(name, *damper, report.family_speed_m_s));
  }
  if (report.ends.empty())
    throw core::JobError({bike_path}, "no end of this bike has a damper",
                         "add a [front.damper] or [rear.damper] table");
  return report;
}

}  // namespace clickwise::workflow
