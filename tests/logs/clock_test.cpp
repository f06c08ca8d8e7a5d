#include "clickwise/logs/clock.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <random>

#include "clickwise/core/errors.hpp"

using namespace clickwise;
using logs::Clock;
using run::FaultKind;

namespace {

constexpr double nan_value = std::numeric_limits<double>::quiet_NaN();

std::vector<double> steady(std::size_t count, double step, double start = 0.0) {
  std::vector<double> ticks(count);
  for (std::size_t i = 0; i < count; ++i) ticks[i] = start + step * static_cast<double>(i);
  return ticks;
}

Clock lay(std::vector<double> ticks, double seconds_per_tick = 1e-6) {
  logs::ClockReadings readings;
  readings.ticks = std::move(ticks);
  readings.seconds_per_tick = seconds_per_tick;
  readings.column = "t";
  return logs::lay_clock(std::move(readings), "larch.csv");
}

double seconds(const Clock& clock, FaultKind kind) {
  double sum = 0.0;
  for (const run::Fault& fault : clock.faults.faults())
    if (fault.kind == kind) sum += fault.seconds;
  return sum;
}

// Holds for every clock: strictly increasing from 0, and stretches that cover it.
void check_order(const Clock& clock) {
  REQUIRE(!clock.t_s.empty());
  CHECK(clock.t_s[0] == 0.0);
  for (std::size_t i = 1; i < clock.t_s.size(); ++i) REQUIRE(clock.t_s[i] > clock.t_s[i - 1]);
  std::size_t begin = 0;
  for (const run::Stretch& stretch : clock.stretches) {
    CHECK(stretch.begin == begin);
    CHECK(stretch.end > stretch.begin);
    begin = stretch.end;
  }
  CHECK(begin == clock.t_s.size());
}

}  // namespace

TEST_CASE("a steady clock has one stretch and no faults", "[clock]") {
  const Clock clock = lay(steady(1000, 1000.0, 5e6));
  check_order(clock);
  CHECK(clock.faults.empty());
  CHECK(clock.stretches.size() == 1);
  CHECK(clock.interval_s == Approx(1e-3).epsilon(1e-12));
  CHECK(clock.t_s.back() == Approx(0.999).epsilon(1e-12));
}

TEST_CASE("stamps of 3 kHz rounded to 0.1 ms keep the true rate and are no fault", "[clock]") {
  // Their median step is 0.3 ms, 11 % off (docs/method section 2); the mean over the stretch is
  // wrong by one grid step in all at most.
  std::vector<double> ticks;
  for (int i = 0; i < 6000; ++i) ticks.push_back(std::round(i / 0.3));
  for (double& tick : ticks) tick /= 10.0;
  const Clock clock = lay(ticks, 1e-3);
  check_order(clock);
  CHECK(clock.faults.empty());
  CHECK(std::abs(clock.interval_s - 1.0 / 3000.0) < 0.1e-3 / 5999.0);
  CHECK(clock.resolution_s == Approx(1e-4));
  for (std::size_t i = 0; i < 6000; i += 7)  // half a grid step at most, wherever it starts
    CHECK(std::abs(clock.t_s[i] - static_cast<double>(i) / 3000.0) < 0.5e-4 + 1e-9);
  const double step = clock.t_s[3000] - clock.t_s[2999];
  CHECK(std::abs(step - 1.0 / 3000.0) < 1e-7);
}

TEST_CASE("stamps coarser than the samples are spread, not merged", "[clock]") {
  std::vector<double> ms;
  for (int i = 0; i < 3000; ++i) ms.push_back(std::floor(i / 3.0));
  const Clock clock = lay(ms, 1e-3);
  check_order(clock);
  CHECK(clock.t_s.size() == 3000);
  CHECK(clock.faults.empty());
  CHECK(clock.repeated_stamps == 2000);
  CHECK(std::abs(clock.interval_s - 1.0 / 3000.0) < 1e-3 / 2999.0);

  std::vector<double> whole_seconds;
  for (int i = 0; i < 2000; ++i) whole_seconds.push_back(std::floor(i / 100.0));
  const Clock slow = lay(whole_seconds, 1.0);
  check_order(slow);
  CHECK(slow.faults.empty());
  CHECK(slow.interval_s == Approx(0.01).epsilon(0.01));
}

TEST_CASE("1 kHz stamped in whole ms by a drifting clock is no fault", "[clock]") {
  std::vector<double> ms;
  for (int i = 0; i < 5000; ++i) ms.push_back(std::floor(i * 0.9993));
  const Clock clock = lay(ms, 1e-3);
  check_order(clock);
  CHECK(clock.faults.empty());
  CHECK(clock.t_s.size() == 5000);
}

TEST_CASE("a gap is the time lost between two samples", "[clock]") {
  for (const double lost_samples : {1.0, 2.0, 3.0, 40.0, 5000.0}) {
    std::vector<double> ticks = steady(500, 1000.0);
    for (std::size_t i = 200; i < 500; ++i) ticks[i] += lost_samples * 1000.0;
    const Clock clock = lay(ticks);
    check_order(clock);
    CHECK(clock.faults.count(FaultKind::gap) == 1);
    CHECK(seconds(clock, FaultKind::gap) == Approx(lost_samples * 1e-3).epsilon(1e-9));
    REQUIRE(clock.stretches.size() == 2);
    CHECK(clock.stretches[1].begin == 200);
    CHECK(clock.interval_s == Approx(1e-3).epsilon(1e-9));
    // Samples and gaps make up the whole.
    CHECK(clock.t_s.back() + clock.interval_s ==
          Approx(500 * clock.interval_s + seconds(clock, FaultKind::gap)).epsilon(1e-9));
  }
}

TEST_CASE("single samples dropped at random are each found", "[clock]") {
  std::mt19937 random(3);
  std::uniform_real_distribution<double> jitter(-120.0, 120.0);
  std::vector<double> ticks;
  long long dropped = 0;
  for (int i = 0; i < 20000; ++i) {
    if (i % 97 == 50) {
      ++dropped;
      continue;
    }
    ticks.push_back(std::round(1000.0 * i + jitter(random)));
  }
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.faults.count(FaultKind::gap) == dropped);
  // Each gap's seconds carry the jitter of two stamps, uniform with sd 120/sqrt(3) us.
  const double sigma = 120e-6 / std::sqrt(3.0) * std::sqrt(2.0 * static_cast<double>(dropped));
  CHECK(std::abs(seconds(clock, FaultKind::gap) - 1e-3 * static_cast<double>(dropped)) < 4 * sigma);
}

TEST_CASE("jitter that neighbours make up for is no gap", "[clock]") {
  std::vector<double> ticks = steady(1000, 1000.0);
  for (std::size_t i = 50; i < 1000; i += 50) ticks[i] += 800.0;  // steps of 1.8 and 0.2 ms
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.faults.empty());
  CHECK(clock.stretches.size() == 1);
}

TEST_CASE("counters that overflow go on", "[clock]") {
  const auto wrapped = [](double period, double start, double step, std::size_t count) {
    std::vector<double> ticks = steady(count, step, start);
    for (double& tick : ticks) tick = std::fmod(tick, period);
    return ticks;
  };
  SECTION("2^32 us") {
    const Clock clock = lay(wrapped(4294967296.0, 4294967296.0 - 300500.0, 1000.0, 1000));
    check_order(clock);
    CHECK(clock.wraps == 1);
    CHECK(clock.faults.empty());
    CHECK(clock.t_s.back() == Approx(0.999).epsilon(1e-12));
  }
  SECTION("2^32 ms") {
    const Clock clock = lay(wrapped(4294967296.0, 4294967296.0 - 500.0, 2.0, 1000), 1e-3);
    CHECK(clock.wraps == 1);
    CHECK(clock.t_s.back() == Approx(1.998).epsilon(1e-12));
  }
  SECTION("2^32 us written in ms") {
    const Clock clock = lay(wrapped(4294967.296, 4294967.296 - 500.0, 2.0, 1000), 1e-3);
    CHECK(clock.wraps == 1);
    CHECK(clock.t_s.back() == Approx(1.998).epsilon(1e-9));
  }
  SECTION("2^16 us, again and again") {
    const Clock clock = lay(wrapped(65536.0, 0.0, 1000.0, 1000));
    CHECK(clock.wraps == 15);
    CHECK(clock.faults.empty());
    CHECK(clock.t_s.back() == Approx(0.999).epsilon(1e-12));
  }
  SECTION("a gap across the overflow stays a gap") {
    std::vector<double> ticks = wrapped(4294967296.0, 4294967296.0 - 300500.0, 1000.0, 1000);
    ticks.erase(ticks.begin() + 250, ticks.begin() + 400);
    const Clock clock = lay(ticks);
    CHECK(clock.wraps == 1);
    CHECK(clock.faults.count(FaultKind::gap) == 1);
    CHECK(seconds(clock, FaultKind::gap) == Approx(0.150).epsilon(1e-9));
  }
  SECTION("midnight") {
    logs::ClockReadings readings;
    readings.ticks = wrapped(86400.0, 86399.0, 0.01, 500);
    readings.time_of_day = true;
    const Clock clock = logs::lay_clock(std::move(readings), "larch.csv");
    CHECK(clock.wraps == 1);
    CHECK(clock.faults.empty());
  }
}

TEST_CASE("behind a restart time goes on one interval after the last sample", "[clock]") {
  std::vector<double> ticks = steady(300, 1000.0, 7e6);
  const std::vector<double> again = steady(200, 1000.0);
  ticks.insert(ticks.end(), again.begin(), again.end());
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.faults.count(FaultKind::time_restart) == 1);
  CHECK(clock.faults.count(FaultKind::gap) == 0);
  REQUIRE(clock.stretches.size() == 2);
  CHECK(clock.stretches[1].begin == 300);
  CHECK(clock.t_s[300] - clock.t_s[299] == Approx(1e-3).epsilon(1e-9));
  CHECK(clock.t_s.back() == Approx(0.499).epsilon(1e-9));
}

TEST_CASE("a clock set forward by years makes no gap of years", "[clock]") {
  std::vector<double> ticks = steady(300, 0.01);
  for (std::size_t i = 100; i < 300; ++i) ticks[i] += 1.7e9;
  const Clock clock = lay(ticks, 1.0);
  check_order(clock);
  CHECK(clock.faults.count(FaultKind::time_restart) == 1);
  CHECK(clock.t_s.back() == Approx(2.99).epsilon(1e-6));  // stamps of 1.7e9 s hold 0.24 us
}

TEST_CASE("a reboot in front of a sample breaks the clock even where time seems to go on",
          "[clock]") {
  logs::ClockReadings readings;
  readings.ticks = steady(100, 0.01);
  readings.reboots = {40};
  const Clock clock = logs::lay_clock(std::move(readings), "larch.csv");
  CHECK(clock.stretches.size() == 2);
  CHECK(clock.faults.count(FaultKind::time_restart) == 1);
  CHECK(clock.t_s.back() == Approx(0.99).epsilon(1e-12));
}

TEST_CASE("rows written twice are merged and counted, and lose no time", "[clock]") {
  std::vector<double> ticks = steady(100, 1000.0);
  ticks.insert(ticks.begin() + 31, ticks[30]);
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.t_s.size() == 100);
  REQUIRE(clock.dropped.size() == 1);
  CHECK(clock.dropped[0].sample == 31);
  CHECK(clock.dropped[0].merged);
  CHECK(clock.faults.count(FaultKind::missing) == 1);
  CHECK(seconds(clock, FaultKind::missing) == 0.0);
  CHECK(clock.faults.count(FaultKind::gap) == 0);
  CHECK(clock.interval_s == Approx(1e-3).epsilon(1e-9));
}

TEST_CASE("nearly coincident samples of a fine clock are merged", "[clock]") {
  std::vector<double> ticks = steady(200, 1000.0);
  for (std::size_t i = 0; i < 200; ++i) ticks[i] += static_cast<double>(i * 7 % 11);  // 1 us grid
  ticks[60] = ticks[61] - 20.0;  // steps of 1.98 and 0.02 ms
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.t_s.size() == 199);
  CHECK(clock.faults.count(FaultKind::missing) == 1);
  CHECK(clock.faults.count(FaultKind::gap) == 0);
}

TEST_CASE("unreadable and unbelievable stamps are left out and counted with their time",
          "[clock]") {
  std::vector<double> ticks = steady(200, 1000.0);
  SECTION("unreadable") {
    ticks[50] = ticks[51] = ticks[120] = nan_value;
  }
  SECTION("far ahead") {
    ticks[50] = ticks[51] = ticks[120] = 9e9;
  }
  SECTION("far behind") {
    ticks[50] = ticks[51] = ticks[120] = 3.0;
  }
  const Clock clock = lay(ticks);
  check_order(clock);
  CHECK(clock.t_s.size() == 197);
  CHECK(clock.faults.count(FaultKind::missing) == 3);
  CHECK(seconds(clock, FaultKind::missing) == Approx(3e-3).epsilon(1e-9));
  CHECK(clock.faults.count(FaultKind::gap) == 0);
  CHECK(clock.faults.count(FaultKind::time_restart) == 0);
  CHECK(clock.stretches.size() == 3);
}

TEST_CASE("rows lost with their time break the clock without being a gap as well", "[clock]") {
  logs::ClockReadings readings;
  readings.ticks = steady(100, 1000.0);
  readings.ticks.erase(readings.ticks.begin() + 40, readings.ticks.begin() + 43);
  readings.seconds_per_tick = 1e-6;
  readings.lost = {{40, 3}, {70, 1}};  // the second lost row took no time
  const Clock clock = logs::lay_clock(std::move(readings), "larch.csv");
  CHECK(clock.faults.count(FaultKind::gap) == 0);
  CHECK(clock.malformed_s == Approx(3e-3).epsilon(1e-9));
  CHECK(clock.stretches.size() == 2);
}

TEST_CASE("what is no clock is refused", "[clock]") {
  CHECK_THROWS_AS(lay({}), core::JobError);
  CHECK_THROWS_AS(lay({1.0, 2.0}), core::JobError);
  CHECK_THROWS_AS(lay({1.0, nan_value, 2.0, nan_value}), core::JobError);
  CHECK_THROWS_AS(lay(std::vector<double>(100, 5.0)), core::JobError);
  CHECK_THROWS_AS(lay(steady(100, -10.0, 5000.0)), core::JobError);
  std::vector<double> random_readings;
  std::mt19937 random(8);
  for (int i = 0; i < 500; ++i) random_readings.push_back(static_cast<double>(random() % 4096));
  CHECK_THROWS_AS(lay(random_readings), core::JobError);
  CHECK(lay({1000.0, 2000.0, 3000.0}).t_s.size() == 3);
}

TEST_CASE("any stamps give a clock in order or a refusal", "[clock]") {
  std::mt19937 random(21);
  for (int round = 0; round < 4000; ++round) {
    std::vector<double> ticks;
    double now = 0.0;
    const auto count = random() % 60;
    for (std::size_t i = 0; i < count; ++i) {
      const auto kind = random() % 16;
      if (kind == 0) now -= static_cast<double>(random() % 5000);
      if (kind == 1) now += static_cast<double>(random()) * 100.0;
      if (kind != 2) now += 1000.0;
      ticks.push_back(kind == 3 ? nan_value : now);
    }
    try {
      const Clock clock = lay(ticks);
      check_order(clock);
      CHECK(clock.t_s.size() + clock.dropped.size() == ticks.size());
    } catch (const core::JobError&) {
      CHECK(true);
    }
  }
}

TEST_CASE("a clock without stamps runs at its rate and breaks at reboots", "[clock]") {
  const Clock clock = logs::uniform_clock(10, 200.0, {4});
  check_order(clock);
  CHECK(clock.t_s.back() == 9.0 / 200.0);
  CHECK(clock.stretches.size() == 2);
  CHECK(clock.faults.count(FaultKind::time_restart) == 1);
}

TEST_CASE("merged readings are the mean of what can be read", "[clock]") {
  const std::vector<logs::Dropped> dropped{{1, true}, {3, false}, {5, true}, {6, true}};
  const auto kept = logs::kept_readings({1, 3, 5, 99, nan_value, 7, 9, 11}, dropped);
  CHECK(kept == std::vector<double>{2, 5, 8, 11});
}
