// Logs of others, each with the faults that its NOTICE.md documents.
#include <catch2/catch.hpp>
#include <cmath>
#include <filesystem>
#include <string>

#include "clickwise/logs/facts.hpp"
#include "clickwise/logs/text_log.hpp"

using namespace clickwise;
using run::FaultKind;

namespace {

// The path of an open file, or empty (with a warning) where the folder is absent.
std::string open_file(const std::string& name) {
  const std::string path = std::string(CLICKWISE_SHARED_DIR) + "/open-data/" + name;
  if (std::filesystem::exists(path)) return path;
  WARN("skipped: " << name << " is absent");
  return {};
}

run::Recording read(const std::string& path, const std::string& time,
                    const std::vector<bike::ColumnRef>& columns) {
  bike::LogFormat format;
  format.time = bike::TimeColumn{{time, 0}, 1.0};
  return logs::read_text_log(path, format, columns);
}

}  // namespace

TEST_CASE("a flight computer's log: empty cells, words, jitter and a pause of 1068 s", "[open]") {
  const std::string path = open_file("logger-csv-quirks/rocket_flight_computer_excerpt.csv");
  if (path.empty()) return;
  const run::Recording log =
      read(path, "timestamp_seconds", {{"raw_acceleration_z_gs", 0}, {"set_extension", 0}});
  CHECK(log.t_s.size() == 2000);
  // 8.8-12.9 ms, median 11.1 ms: the mean lies between.
  CHECK(log.interval_s > 8.8e-3);
  CHECK(log.interval_s < 12.9e-3);
  CHECK(log.faults.count(FaultKind::gap) == 1);
  CHECK(log.faults.faults().size() <= 3);
  REQUIRE(log.stretches.size() == 2);
  CHECK(log.stretches[1].begin == 121);  // "before the 122nd row"
  const double pause = log.t_s[121] - log.t_s[120];
  CHECK(std::abs(pause - 1068.0) < 1.0);

  const logs::LogFacts facts = logs::inspect_text_log(path);
  CHECK(facts.columns[0].kind == logs::ColumnKind::text);
  REQUIRE(facts.time);
  CHECK(facts.columns[facts.time->column].name == "timestamp_seconds");
  const auto half_empty = std::count_if(
      facts.columns.begin(), facts.columns.end(), [](const logs::ColumnFacts& column) {
        return column.missing > 500 && column.kind == logs::ColumnKind::number;
      });
  CHECK(half_empty == 3);  // "three columns empty for the first half"
}

TEST_CASE("bicycle rides at 1 Hz: day/month stamps with a blank, repeated stamps, a gap of 6 s",
          "[open]") {
  const int repeated[] = {3, 1, 0};
  const std::size_t rows[] = {232, 483, 1043};
  const char* names[] = {"1", "2", "5"};
  for (std::size_t i = 0; i < 3; ++i) {
    const std::string path =
        open_file(std::string("logger-csv-quirks/sensebox_bicycle_dataset_") + names[i] + ".csv");
    if (path.empty()) return;
    INFO(path);
    const logs::LogFacts facts = logs::inspect_text_log(path);
    CHECK(facts.rows == rows[i]);
    REQUIRE(facts.time);
    CHECK(facts.time->unit == "date");
    CHECK(facts.repeated_stamps == repeated[i]);
    CHECK(std::abs(facts.rate_hz - 1.0) < 0.1);
    if (i == 2) CHECK(std::abs(facts.longest_gap_s - 5.0) < 0.1);  // a step of 6 s loses 5
    const run::Recording log = read(path, "timestamp", {{"speed", 0}, {"vibration", 0}});
    CHECK(log.channels[0].readings.size() == log.t_s.size());
  }
}

TEST_CASE("a damper on a shaking table: uniform logs without faults", "[open]") {
  const std::pair<const char*, std::pair<std::size_t, double>> files[] = {
      {"ensaio1.1", {3001, 100}},  {"ensaio4a", {3001, 100}},   {"ensaio8a", {3001, 100}},
      {"ensaio14a", {3001, 100}},  {"ensaio.A.1", {1501, 100}}, {"ensaio.A.10", {1501, 100}},
      {"ensaio.B.5", {1501, 100}}, {"ensaio16", {751, 50}},     {"exp1", {751, 50}}};
  for (const auto& [name, expected] : files) {
    const std::string path = open_file(std::string("mr-damper-shaking-table/") + name + ".csv");
    if (path.empty()) return;
    INFO(name);
    const run::Recording log = read(path, "time_s", {{"displacement_mm", 0}, {"force_N", 0}});
    CHECK(log.t_s.size() == expected.first);
    CHECK(std::abs(1.0 / log.interval_s - expected.second) < 1e-6);
    CHECK(log.faults.empty());
    const logs::LogFacts facts = logs::inspect_text_log(path);
    CHECK(facts.columns[1].kind == logs::ColumnKind::number);
  }
  const logs::LogFacts facts =
      logs::inspect_text_log(open_file("mr-damper-shaking-table/ensaio1.1.csv"));
  CHECK(facts.columns[1].resolution == Approx(0.005).epsilon(1e-9));  // "steps of 0.005 mm"
}

TEST_CASE("an IMU log with ten missed samples", "[open]") {
  const std::string path = open_file("imu-sample-files/fusion_sensor_data.csv");
  if (path.empty()) return;
  const run::Recording log = read(path, "Time (s)", {{"Accelerometer Z (g)", 0}});
  CHECK(log.t_s.size() == 13514);
  // The NOTICE's 99.2 Hz is the median step. 13,513 steps, ten of them three intervals long, in
  // 135.327 s are 100.0 Hz; the ten are known to a tenth of an interval or so.
  CHECK(std::abs(1.0 / log.interval_s - 13533.0 / 135.326642) < 0.01);
  CHECK(log.faults.count(FaultKind::gap) == 10);  // "ten steps over 15 ms"
  CHECK(log.faults.faults().size() == 1);
  const logs::LogFacts facts = logs::inspect_text_log(path);
  REQUIRE(facts.time);
  CHECK(facts.time->column == 0);
  CHECK(facts.time->unit == "s");
  for (const logs::ColumnFacts& column : facts.columns) CHECK(column.missing == 0);
}

TEST_CASE("satellite logs at 1 Hz with pauses of 276 s and 403 s", "[open]") {
  const std::pair<const char*, double> files[] = {{"trip_12", 0}, {"trip_16", 276},
                                                  {"trip_19", 0}, {"trip_21", 0},
                                                  {"trip_24", 0}, {"trip_34", 403}};
  for (const auto& [name, pause] : files) {
    const std::string path = open_file(std::string("ebike-gps-same-route/") + name + ".csv");
    if (path.empty()) return;
    INFO(name);
    const logs::LogFacts facts = logs::inspect_text_log(path);
    REQUIRE(facts.time);
    CHECK(facts.columns[facts.time->column].name == "timestamp");
    CHECK(std::abs(facts.rate_hz - 1.0) < 0.05);
    if (pause > 0) CHECK(std::abs(facts.longest_gap_s - (pause - 1.0)) < 0.1);
    const run::Recording log = read(path, "timestamp", {{"speed", 0}, {"distance", 0}});
    CHECK(log.channels[0].readings.size() == log.t_s.size());
    CHECK(log.faults.count(FaultKind::time_restart) == 0);
  }
}
