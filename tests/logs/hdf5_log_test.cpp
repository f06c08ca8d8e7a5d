#include <catch2/catch.hpp>
#include <cstdint>

#include "clickwise/io/hdf5_writer.hpp"
#include "clickwise/logs/facts.hpp"
#include "clickwise/logs/log.hpp"
#include "support/log_file.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

constexpr std::size_t rows = 2000;

bike::LogFormat in_group(const std::string& group) {
  bike::LogFormat format;
  format.hdf5_group = group;
  format.time = bike::TimeColumn{{"t_us", 0}, 1e-6};
  return format;
}

// A ride at 500 Hz: stamps as integers, one channel as floats, one as doubles; beside them a
// channel of another length, words, and a group of another rate.
std::string ride() {
  std::vector<std::int64_t> t_us(rows);
  std::vector<float> fork(rows);
  std::vector<double> shock(rows);
  for (std::size_t i = 0; i < rows; ++i) {
    t_us[i] = static_cast<std::int64_t>(2000 * i);
    fork[i] = static_cast<float>(i) / 4.0F;
    shock[i] = 0.1 * static_cast<double>(i);
  }
  io::Hdf5Writer writer;
  writer.group("/ride");
  writer.data("/ride/t_us", std::span<const std::int64_t>(t_us), "us");
  writer.data("/ride/fork", std::span<const float>(fork), "mm");
  writer.data("/ride/shock", std::span<const double>(shock), "mm");
  writer.data("/ride/short", std::span<const double>(shock).first(rows - 10), "mm");
  writer.text("/ride/remark", "dry", "text");
  writer.group("/imu");
  writer.data("/imu/ax", std::span<const double>(shock).first(200), "g");
  return writer.finish();
}

}  // namespace

TEST_CASE("the data sets of a group are the columns of a log", "[logs]") {
  const test::LogFile file(ride());
  const run::Recording recording =
      logs::read_log(file.path(), in_group("/ride"), {{"shock", 0}, {"fork", 0}});
  REQUIRE(recording.t_s.size() == rows);
  CHECK(recording.interval_s == Approx(2e-3).epsilon(1e-12));
  CHECK(recording.channels[0].name == "shock");
  CHECK(recording.channels[0].readings[1999] == 0.1 * 1999.0);
  CHECK(recording.channels[1].readings[3] == 0.75);
  CHECK(recording.faults.empty());
}

TEST_CASE("a group or data set that does not fit is named with what to do", "[logs]") {
  const test::LogFile file(ride());
  const auto refused = [&](const std::string& group, const bike::ColumnRef& column) {
    return test::refusal([&] { logs::read_log(file.path(), in_group(group), {column}); });
  };
  CHECK_THAT(refused("/rides", {"fork", 0}),
             Contains("no group /rides") && Contains("groups that hold some: /imu, /ride"));
  CHECK_THAT(refused("/ride", {"forks", 0}), Contains("\"forks\"") && Contains("mean \"fork\""));
  CHECK_THAT(refused("/ride", {"short", 0}),
             Contains("/ride/short holds 1990 values, but the others hold 2000") &&
                 Contains("a group of their own"));
  CHECK_THAT(refused("/ride", {"remark", 0}), Contains("\"remark\""));
  CHECK_THAT(refused("/", {"fork", 0}), Contains("the group / holds no data sets"));
  bike::LogFormat text;
  text.time = bike::TimeColumn{{"t_us", 0}, 1e-6};
  CHECK_THAT(test::refusal([&] {
               logs::read_log(file.path(), text, {{"fork", 0}});
             }),
             Contains("add hdf5 = { group = \"/ride\" } to [log]"));
  const test::LogFile csv("t_us,fork\n0,1\n1,2\n");
  CHECK_THAT(test::refusal([&] {
               logs::read_log(csv.path(), in_group("/ride"), {{"fork", 0}});
             }),
             Contains("no HDF5 file"));
}

TEST_CASE("without a bike file the richest group is told, and all that the file holds", "[logs]") {
  const test::LogFile file(ride());
  const logs::LogFacts facts = logs::inspect_log(file.path());
  CHECK(facts.hdf5_group == "/ride");
  CHECK(facts.rows == rows);
  REQUIRE(facts.columns.size() == 3);
  CHECK(facts.columns[0].name == "fork");
  CHECK(facts.columns[0].units == "mm");
  REQUIRE(facts.time);
  CHECK(facts.columns[facts.time->column].name == "t_us");
  CHECK(facts.rate_hz == Approx(500.0).epsilon(1e-9));
  CHECK_THAT(facts.notes.at(0), Contains("short holds 1990"));
  bool imu_listed = false;
  for (const std::string& line : facts.contents)
    imu_listed = imu_listed || (line.starts_with("/imu/ax") && line.ends_with("float64  200 g"));
  CHECK(imu_listed);
}
