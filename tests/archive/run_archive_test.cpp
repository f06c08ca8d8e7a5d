#include "clickwise/archive/run_archive.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>

#include "clickwise/core/units.hpp"
#include "clickwise/io/hdf5_file.hpp"
#include "clickwise/io/hdf5_writer.hpp"
#include "support/log_file.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

constexpr std::size_t samples = 70001;  // more than one chunk

run::Motion random_motion(unsigned seed) {
  std::mt19937 random(seed);
  std::normal_distribution<double> normal;
  run::Motion motion;
  motion.time = {0.25, 1000.0 / 3.0, samples};
  for (std::size_t i = 0; i < samples; ++i) {
    motion.travel_m.push_back(0.05 + 0.03 * normal(random));
    motion.velocity_m_s.push_back(normal(random));
    motion.velocity_sigma_m_s.push_back(std::abs(0.01 * normal(random)));
    motion.valid.push_back(i % 97 != 0);
  }
  motion.velocity_m_s[3] = std::numeric_limits<double>::quiet_NaN();
  motion.velocity_noise_m_s = 1.0 / 3.0;
  motion.reading_noise_m = 1e-5 / 7.0;
  motion.cutoff_hz = 31.4;
  motion.smoothing = "an adaptive spline, 30.3 \xC2\xB5m";
  return motion;
}

archive::Run random_run() {
  archive::Run run;
  run.created = "2026-05-04T03:02:01Z";
  run.program = "clickwise 0";
  run.bike = {"larch.toml", "schema = \"clickwise-bike-1\"\n"};
  run.beside = {{"dyno/fork.csv", "velocity_mm_s,force_n\n"}};
  run.log_name = "log.csv";
  run.duration_s = 1.0 / 7.0;
  run.samples = 70123;
  run.faults.add(run::FaultKind::gap, "", 3, 0.1);
  run.faults.add(run::FaultKind::stuck, "fork_adc", 1, 1.0 / 3.0);
  run.notes = {"a note", "another one"};
  run.front = archive::EndOfRun{random_motion(1), 0.17};
  run.rear = archive::EndOfRun{random_motion(2), 0.06};
  run.rear->motion.source = run::Source::imu_pair;
  run.rear->felt_m_s2.assign(samples, 9.80665);
  run.time = run.front->motion.time;
  run.riding.assign(samples, 1);
  run.riding[5] = 0;
  run.speed_m_s.assign(samples, 1.0 / 3.0);
  archive::round_to_stored(run.front->motion);
  archive::round_to_stored(run.rear->motion);
  archive::round_to_stored(run.speed_m_s);
  archive::round_to_stored(run.rear->felt_m_s2);
  return run;
}

// Equal bit for bit, one NaN being as good as another.
std::size_t differences(const std::vector<double>& a, const std::vector<double>& b) {
  if (a.size() != b.size()) return std::max(a.size(), b.size());
  std::size_t count = 0;
  for (std::size_t i = 0; i < a.size(); ++i)
    count += !(a[i] == b[i] || (std::isnan(a[i]) && std::isnan(b[i])));
  return count;
}

void check_same(const archive::EndOfRun& a, const archive::EndOfRun& b) {
  CHECK(differences(a.motion.travel_m, b.motion.travel_m) == 0);
  CHECK(differences(a.motion.velocity_m_s, b.motion.velocity_m_s) == 0);
  CHECK(differences(a.motion.velocity_sigma_m_s, b.motion.velocity_sigma_m_s) == 0);
  CHECK(a.motion.valid == b.motion.valid);
  CHECK(a.motion.source == b.motion.source);
  CHECK(a.motion.velocity_noise_m_s == b.motion.velocity_noise_m_s);
  CHECK(a.motion.reading_noise_m == b.motion.reading_noise_m);
  CHECK(a.motion.cutoff_hz == b.motion.cutoff_hz);
  CHECK(a.motion.smoothing == b.motion.smoothing);
  CHECK(a.motion.time.start_s == b.motion.time.start_s);
  CHECK(a.motion.time.rate_hz == b.motion.time.rate_hz);
  CHECK(a.motion.time.samples == b.motion.time.samples);
  CHECK(differences(a.felt_m_s2, b.felt_m_s2) == 0);
  CHECK(a.stroke_m == Approx(b.stroke_m).epsilon(1e-15));
}

}  // namespace

TEST_CASE("what is kept is the nearest float in mm, and keeping it twice changes nothing",
          "[archive]") {
  const run::Motion before = random_motion(3);
  run::Motion once = before;
  archive::round_to_stored(once);
  std::size_t far = 0;
  std::size_t no_float = 0;
  for (std::size_t i = 0; i < samples; ++i) {
    const double mm = core::to_mm(before.travel_m[i]);
    // Half a step of a float's 24 bits, and two roundings of the way to mm and back.
    const double bound = std::abs(before.travel_m[i]) * (0x1p-24 + 0x1p-51);
    far += !(std::abs(once.travel_m[i] - before.travel_m[i]) <= bound);
    no_float += static_cast<float>(core::to_mm(once.travel_m[i])) != static_cast<float>(mm);
  }
  CHECK(far == 0);
  CHECK(no_float == 0);
  CHECK(once.velocity_noise_m_s == core::from_mm(static_cast<double>(static_cast<float>(
                                       core::to_mm(before.velocity_noise_m_s)))));
  run::Motion twice = once;
  archive::round_to_stored(twice);
  CHECK(differences(once.travel_m, twice.travel_m) == 0);
  CHECK(differences(once.velocity_m_s, twice.velocity_m_s) == 0);
  CHECK(once.reading_noise_m == twice.reading_noise_m);
}

TEST_CASE("a run comes back from its archive bit for bit", "[archive]") {
  const test::LogFile file("");
  const archive::Run run = random_run();
  archive::write_archive(file.path(), run, {});
  CHECK(archive::is_archive(file.path()));
  const archive::Run back = archive::read_archive(file.path());
  CHECK(back.created == run.created);
  CHECK(back.program == run.program);
  CHECK(back.bike.name == run.bike.name);
  CHECK(back.bike.text == run.bike.text);
  REQUIRE(back.beside.size() == 1);
  CHECK(back.beside[0].name == run.beside[0].name);
  CHECK(back.beside[0].text == run.beside[0].text);
  CHECK(back.log_name == run.log_name);
  CHECK(back.duration_s == run.duration_s);
  CHECK(back.samples == run.samples);
  CHECK(back.notes == run.notes);
  REQUIRE(back.faults.faults().size() == 2);
  for (std::size_t i = 0; i < 2; ++i) {
    CHECK(back.faults.faults()[i].kind == run.faults.faults()[i].kind);
    CHECK(back.faults.faults()[i].channel == run.faults.faults()[i].channel);
    CHECK(back.faults.faults()[i].count == run.faults.faults()[i].count);
    CHECK(back.faults.faults()[i].seconds == run.faults.faults()[i].seconds);
  }
  CHECK(back.riding == run.riding);
  CHECK(differences(back.speed_m_s, run.speed_m_s) == 0);
  REQUIRE(back.front);
  REQUIRE(back.rear);
  check_same(*back.front, *run.front);
  check_same(*back.rear, *run.rear);
}

TEST_CASE("every data set has units, and the series lie on the time axis", "[archive]") {
  const test::LogFile file("");
  archive::write_archive(file.path(), random_run(), {});
  const io::Hdf5File read(file.path());
  std::vector<std::string> groups{"/"};
  std::size_t data_sets = 0;
  while (!groups.empty()) {
    const std::string group = groups.back();
    groups.pop_back();
    for (const io::Hdf5Item& item : read.items(group)) {
      const std::string name = group + (group == "/" ? "" : "/") + item.name;
      if (item.kind == io::Hdf5Kind::group) {
        groups.push_back(name);
        continue;
      }
      ++data_sets;
      INFO(name);
      CHECK_FALSE(item.units.empty());
    }
  }
  CHECK(data_sets > 20);
  CHECK(read.number_attribute("/time", "rate_hz") == 1000.0 / 3.0);
  CHECK(read.number_attribute("/time", "start_s") == 0.25);
  CHECK(read.text_attribute("/time", "CLASS") == "DIMENSION_SCALE");
}

TEST_CASE("a foreign file, a later version and a missing part are told apart", "[archive]") {
  const test::LogFile file("");
  const auto write = [&](const std::string& schema) {
    io::Hdf5Writer writer;
    if (!schema.empty()) writer.attribute("/", "schema", schema);
    writer.attribute("/", "program", "clickwise 9.1");
    file.write(writer.finish());
  };
  write("");
  CHECK_FALSE(archive::is_archive(file.path()));
  CHECK_THAT(test::refusal([&] { archive::read_archive(file.path()); }),
             Contains("no archive of this program"));
  write("clickwise-run-2");
  CHECK(archive::is_archive(file.path()));
  CHECK_THAT(test::refusal([&] { archive::read_archive(file.path()); }),
             Contains("\"clickwise-run-2\", written by clickwise 9.1") &&
                 Contains("use the program that wrote it"));
  write("clickwise-run-1");
  CHECK_THAT(test::refusal([&] { archive::read_archive(file.path()); }),
             Contains("this archive is damaged: ") && Contains("missing") &&
                 Contains("import the log again"));
}
