// A real damper's record in place of an invented one: A. N. Vargas, "Data, source code, and
// documents for the shaking table with MR-damper", Zenodo 2021, doi 10.5281/zenodo.4445334
// (open-data/mr-damper-shaking-table).
#include <catch2/catch.hpp>
#include <cmath>
#include <fstream>
#include <sstream>

#include "clickwise/core/statistics.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/sim/apparent.hpp"

using namespace clickwise;

namespace {

constexpr double interval_s = 0.01;

struct Record {
  std::vector<double> travel_m, velocity_m_s, force_n;
};

// Travel from 10 mm on; velocity by the straight line through seven samples.
Record read_record(const std::string& name) {
  Record record;
  std::ifstream file(CLICKWISE_SHARED_DIR "/open-data/mr-damper-shaking-table/" + name);
  std::string line;
  std::getline(file, line);
  double t = 0.0, x = 0.0, published = 0.0, force = 0.0;
  char comma = 0;
  while (std::getline(file, line)) {
    std::istringstream cells(line);
    cells >> t >> comma >> x >> comma >> published >> comma >> force;
    record.travel_m.push_back(core::from_mm(x + 10.0));
    record.force_n.push_back(force);
  }
  const std::size_t n = record.travel_m.size();
  record.velocity_m_s.assign(n, 0.0);
  for (std::size_t i = 3; i + 3 < n; ++i)
    for (const std::size_t k : {1u, 2u, 3u})
      record.velocity_m_s[i] += static_cast<double>(k) *
                                (record.travel_m[i + k] - record.travel_m[i - k]) /
                                (28.0 * interval_s);
  return record;
}

// Median force where the shaft moves at about this velocity.
double median_force_n(const Record& record, double velocity_m_s) {
  std::vector<double> forces;
  for (std::size_t i = 0; i < record.force_n.size(); ++i)
    if (std::abs(record.velocity_m_s[i] - velocity_m_s) < 0.005)
      forces.push_back(record.force_n[i]);
  REQUIRE(forces.size() > 50);
  return core::median(forces);
}

// Half the loop's height at a point, friction included.
double loop_n(const sim::ApparentDamper& damper, std::size_t k) {
  return damper.friction_n.value +
         0.5 * (damper.compression[k].force_n.value + damper.rebound[k].force_n.value);
}

}  // namespace

// The measured force as what a mass of mean force / g would feel, the mean carried by a flat
// spring: the fit must give back half the loop's height at its fastest point, which plain medians
// measure. They scatter by some N; a tenth of the loop allows for a median against a mean of a skew
// law.
TEST_CASE("a real damper's record gives its loop back", "[sim][open]") {
  for (const char* name : {"ensaio1.1.csv", "ensaio4a.csv"}) {
    const Record record = read_record(name);
    if (record.force_n.empty()) {
      WARN("skipped: no open data " << name);
      return;
    }
    CAPTURE(name);
    const double mean_n = core::mean_and_deviation(record.force_n).mean;
    sim::ApparentEnd end;
    end.sprung_mass_kg = mean_n / core::standard_gravity_m_s2;
    end.stroke_m = 0.06;
    end.spring.kind = bike::TableSpring{core::Polyline({0.0, 0.06}, {mean_n, mean_n})};
    std::vector<double> felt;
    for (const double force : record.force_n) felt.push_back(force / end.sprung_mass_kg);
    const std::vector<std::uint8_t> counted(felt.size(), 1);
    const auto found = sim::apparent_damper(end, {.interval_s = interval_s,
                                                  .travel_m = record.travel_m,
                                                  .velocity_m_s = record.velocity_m_s,
                                                  .felt_m_s2 = felt,
                                                  .counted = counted});
    REQUIRE(found.problem.empty());
    CHECK(!found.spring_share_told);
    const std::size_t points = std::min(found.compression.size(), found.rebound.size());
    REQUIRE(points > 0);
    const double speed_m_s = found.rebound[points - 1].speed_m_s;
    const double direct =
        0.5 * (median_force_n(record, speed_m_s) - median_force_n(record, -speed_m_s));
    CAPTURE(speed_m_s, found.friction_n.value, found.lag_s);
    CHECK(loop_n(found, points - 1) == Approx(direct).epsilon(0.1));
    CHECK(found.friction_n.value > 0.5 * direct);  // such a damper is mostly a yield force
  }
}
