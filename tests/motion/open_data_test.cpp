// Motion of published records, whose velocity columns are checked rather than believed.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <filesystem>
#include <fstream>
#include <numeric>
#include <sstream>
#include <string>
#include <vector>

#include "clickwise/motion/potentiometer.hpp"

namespace motion = clickwise::motion;
namespace run = clickwise::run;

namespace {

struct Record {
  std::vector<double> t_s, position_m, velocity_m_s;
};

const std::string open_data = std::string(CLICKWISE_SHARED_DIR) + "/open-data/";

bool absent(const std::string& path) {
  if (std::filesystem::exists(path)) return false;
  WARN("skipped: " << path << " is not there");
  return true;
}

// Columns time_s, displacement_mm, published_velocity_mmps, force_N.
Record read_shaking_table(const std::string& path) {
  std::ifstream file(path);
  std::string line;
  std::getline(file, line);
  Record record;
  while (std::getline(file, line)) {
    std::ranges::replace(line, ',', ' ');
    std::istringstream cells(line);
    double t = 0.0, x = 0.0, v = 0.0;
    if (!(cells >> t >> x >> v)) continue;
    record.t_s.push_back(t);
    record.position_m.push_back(x * 1e-3);
    record.velocity_m_s.push_back(v * 1e-3);
  }
  return record;
}

// "data": rows of time (s), displacement (in), friction force, velocity (in/s), ...
Record read_friction_rig(const std::string& path) {
  std::ifstream file(path);
  const std::string text{std::istreambuf_iterator<char>(file), {}};
  Record record;
  const std::string rows = text.substr(text.find("[["), text.find("]]") - text.find("[["));
  for (std::size_t at = rows.find('[', 1); at != std::string::npos; at = rows.find('[', at + 1)) {
    std::string row = rows.substr(at + 1, rows.find(']', at) - at - 1);
    std::ranges::replace(row, ',', ' ');
    std::istringstream cells(row);
    double t = 0.0, x = 0.0, force = 0.0, v = 0.0;
    if (!(cells >> t >> x >> force >> v)) continue;
    record.t_s.push_back(t);
    record.position_m.push_back(x * 0.0254);
    record.velocity_m_s.push_back(v * 0.0254);
  }
  return record;
}

// The displacement as a sensor whose readings are metres from its least value.
run::Motion motion_of(const Record& record) {
  const double least = *std::ranges::min_element(record.position_m);
  const double most = *std::ranges::max_element(record.position_m);
  run::Recording recording;
  recording.name = "open data";
  recording.t_s = record.t_s;
  recording.stretches = {{0, record.t_s.size()}};
  recording.interval_s =
      (record.t_s.back() - record.t_s.front()) / static_cast<double>(record.t_s.size() - 1);
  recording.channels = {{"displacement", record.position_m}};
  clickwise::bike::End end;
  end.stroke_m = most - least;
  end.sensor.travel_m = clickwise::core::Polyline({least, most}, {0.0, most - least});
  auto result = motion::from_potentiometer(recording, 0, end);
  CHECK(result.faults.empty());
  return result.motion;
}

double rms(const std::vector<double>& values) {
  double squares = 0.0;
  for (const double value : values) squares += value * value;
  return std::sqrt(squares / static_cast<double>(values.size()));
}

// rms of published minus ours read `lag` samples later, the mean of two samples for a half.
double difference_at_half_lag(const run::Motion& ours, const Record& record, bool lag) {
  std::vector<double> difference;
  for (std::size_t i = 5; i + 5 < record.velocity_m_s.size(); ++i) {
    const double mine =
        lag ? 0.5 * (ours.velocity_m_s[i] + ours.velocity_m_s[i - 1]) : ours.velocity_m_s[i];
    difference.push_back(record.velocity_m_s[i] - mine);
  }
  return rms(difference);
}

// Least-squares gain of the published velocity on ours.
double gain(const run::Motion& ours, const Record& record) {
  return std::inner_product(ours.velocity_m_s.begin(), ours.velocity_m_s.end(),
                            record.velocity_m_s.begin(), 0.0) /
         std::inner_product(ours.velocity_m_s.begin(), ours.velocity_m_s.end(),
                            ours.velocity_m_s.begin(), 0.0);
}

}  // namespace

// A. N. Vargas, shaking table with MR damper, Zenodo 2021, doi:10.5281/zenodo.4445334. The
// published velocity is the backward difference of the displacement, so it lags half a sample.
TEST_CASE("shaking table: the published velocity lags ours by half a sample", "[motion]") {
  for (const char* name : {"ensaio1.1", "ensaio4a", "ensaio8a", "ensaio14a", "ensaio.A.1",
                           "ensaio.A.10", "ensaio.B.5", "ensaio16", "exp1"}) {
    const std::string path = open_data + "mr-damper-shaking-table/" + name + ".csv";
    if (absent(path)) return;
    CAPTURE(name);
    const Record record = read_shaking_table(path);
    REQUIRE(record.t_s.size() > 700);
    const run::Motion ours = motion_of(record);
    const double lagged = difference_at_half_lag(ours, record, true);
    CHECK(lagged < difference_at_half_lag(ours, record, false));
    // What is left is the noise of the published difference, about sqrt 2 readings an interval.
    CHECK(lagged <
          0.15 * rms(record.velocity_m_s) + 2.0 * ours.reading_noise_m * ours.time.rate_hz);
    CHECK(gain(ours, record) == Approx(1.0).margin(0.06));
  }
}

// D. Coble et al., Dataset-Friction-Damper-with-Backlash, GitHub 2022 (CC BY-SA 4.0).
TEST_CASE("friction rig: two velocity columns agree with ours, the third is in no stated unit",
          "[motion]") {
  const std::string folder = open_data + "friction-damper-rig/";
  if (absent(folder + "d2_1Hz_30lb_1in.json")) return;
  std::vector<std::string> wrong;
  for (const char* name :
       {"d2_1Hz_30lb_1in.json", "d2_2Hz_36lb_0.5in.json", "d4_step0.03ea1forward_first_4s.json"}) {
    CAPTURE(name);
    const Record record = read_friction_rig(folder + name);
    REQUIRE(record.t_s.size() > 3000);
    const run::Motion ours = motion_of(record);
    const double found = gain(ours, record);
    if (std::abs(found - 1.0) > 0.05) {
      wrong.emplace_back(name);
      CHECK(1.0 / found == Approx(126.0).epsilon(0.05));  // NOTICE.md of the data
      continue;
    }
    CHECK(found == Approx(1.0).margin(0.01));
    // NOTICE.md: derivative and column differ by 0.09 and 0.12 in/s rms.
    CHECK(difference_at_half_lag(ours, record, false) < 0.13 * 0.0254);
  }
  CHECK(wrong == std::vector<std::string>{"d4_step0.03ea1forward_first_4s.json"});
}
