#include "clickwise/sim/logger.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <sstream>
#include <string>
#include <vector>

#include "clickwise/core/errors.hpp"
#include "clickwise/sim/write.hpp"
#include "short_scene.hpp"

using namespace clickwise;
using namespace clickwise::sim;
using namespace clickwise::sim_test;

namespace {

using Rows = std::vector<std::vector<std::string>>;

std::string log_text(const Scene& scene, const Truth& truth) {
  std::string text;
  write_log(scene.bike, scene.logger, truth, [&](std::string_view piece) { text += piece; });
  return text;
}

Rows rows_of(const std::string& text) {
  Rows rows;
  std::istringstream lines(text);
  for (std::string line; std::getline(lines, line);) {
    auto& row = rows.emplace_back();
    std::size_t begin = 0;
    for (std::size_t at = 0; at != std::string::npos; begin = at + 1) {
      at = line.find(',', begin);
      row.push_back(line.substr(begin, at == std::string::npos ? at : at - begin));
    }
  }
  return rows;
}

// The short ride, logged with other plans.
struct Logged {
  Scene scene = Folder().scene();
  Truth truth = simulate(scene);

  Rows rows() const { return rows_of(log_text(scene, truth)); }
};

Logged with_fault(PlannedFault fault) {
  Logged logged;
  logged.scene.logger.faults = {std::move(fault)};
  return logged;
}

}  // namespace

TEST_CASE("a log without noise is the truth to half a count", "[sim]") {
  const Logged logged;
  const auto rows = logged.rows();
  CHECK(rows[0] == std::vector<std::string>{"t_us", "fork_adc", "shock_adc", "wheel_kmh"});
  CHECK(rows.size() - 1 == (logged.truth.samples() + 1) / 2);
  const double mm_per_count = 170.0 / 3640.0;
  for (std::size_t i = 1; i < rows.size(); ++i) {
    REQUIRE(std::stod(rows[i][0]) == 2000.0 * static_cast<double>(i - 1));
    const double travel_mm = (3850.0 - std::stod(rows[i][1])) * mm_per_count;
    const double true_mm = 1e3 * logged.truth.front->travel_m[2 * (i - 1)];
    REQUIRE(travel_mm == Approx(true_mm).margin(0.5001 * mm_per_count));
  }
}

TEST_CASE("noise has the deviation asked for, plus rounding", "[sim]") {
  Logged logged;
  logged.scene.logger.noise_counts = 3.0;
  const auto rows = logged.rows();
  double squares = 0.0;
  for (std::size_t i = 1; i < rows.size(); ++i) {
    const double true_count =
        3850.0 - 1e3 * logged.truth.front->travel_m[2 * (i - 1)] * 3640.0 / 170.0;
    squares += std::pow(std::stod(rows[i][1]) - true_count, 2);
  }
  const double n = static_cast<double>(rows.size() - 1);
  const double expected = 9.0 + 1.0 / 12.0;
  CHECK(squares / n == Approx(expected).margin(4.0 * expected * std::sqrt(2.0 / n)));
}

TEST_CASE("jittered stamps stay within their share of a period and tell the sampled moment",
          "[sim]") {
  Logged logged;
  logged.scene.logger.jitter = 0.2;
  logged.scene.logger.time_decimals = 1;
  const auto rows = logged.rows();
  double largest = 0.0;
  for (std::size_t i = 1; i < rows.size(); ++i) {
    const double late = std::stod(rows[i][0]) - 2000.0 * static_cast<double>(i - 1);
    largest = std::max(largest, std::abs(late));
  }
  CHECK(largest <= 400.1);
  CHECK(largest > 350.0);
}

TEST_CASE("a 32-bit clock wraps", "[sim]") {
  Logged logged;
  logged.scene.logger.clock_start = 4294960000.0;
  logged.scene.logger.wrap_u32 = true;
  const auto rows = logged.rows();
  CHECK(rows[1][0] == "4294960000");
  CHECK(rows[4][0] == "4294966000");
  CHECK(rows[5][0] == "704");  // 4294968000 - 2^32
}

TEST_CASE("each planned fault does what it says and no more", "[sim]") {
  const Logged clean;
  const auto plain = clean.rows();
  SECTION("a gap leaves rows out") {
    const auto rows = with_fault({.kind = run::FaultKind::gap, .at_s = 2.0, .seconds = 0.5}).rows();
    CHECK(rows.size() == plain.size() - 250);
    CHECK(rows[1001][0] == "2500000");
  }
  SECTION("a spike hits one reading") {
    const auto rows =
        with_fault({.kind = run::FaultKind::spike, .at_s = 2.0, .channel = "shock_adc"}).rows();
    int different = 0;
    for (std::size_t i = 1; i < rows.size(); ++i) different += rows[i] != plain[i];
    CHECK(different == 1);
    CHECK(std::stoi(rows[1001][2]) == std::min(4095, std::stoi(plain[1001][2]) + 1500));
  }
  SECTION("a stuck channel repeats itself while the other moves on") {
    const auto rows = with_fault({run::FaultKind::stuck, 4.0, 0.4, "fork_adc"}).rows();
    for (std::size_t i = 2001; i < 2201; ++i) {
      REQUIRE(rows[i][1] == plain[2001][1]);
      REQUIRE(rows[i][2] == plain[i][2]);
    }
    CHECK(rows[2201] == plain[2201]);
  }
  SECTION("a saturated channel stands at the converter's end") {
    const auto rows = with_fault({run::FaultKind::saturated, 4.0, 0.1, "fork_adc"}).rows();
    CHECK(rows[2001][1] == "4095");
    CHECK(rows[2051] == plain[2051]);
  }
  SECTION("a missing reading is an empty cell") {
    const auto rows = with_fault({run::FaultKind::missing, 4.0, 0.1, "fork_adc"}).rows();
    CHECK(rows[2001][1].empty());
    CHECK(rows[2001][2] == plain[2001][2]);
  }
  SECTION("a restarted clock counts from zero again") {
    const auto rows = with_fault({.kind = run::FaultKind::time_restart, .at_s = 3.0}).rows();
    CHECK(rows[1500][0] == "2998000");
    CHECK(rows[1501][0] == "0");
  }
  SECTION("a dying battery cuts a line short") {
    Logged logged = with_fault({.kind = run::FaultKind::truncated, .at_s = 3.0});
    const std::string text = log_text(logged.scene, logged.truth);
    CHECK(text.back() != '\n');
    const auto rows = rows_of(text);
    CHECK(rows.size() == 1502);
    CHECK(rows.back().size() < 4);
  }
  SECTION("an unknown channel is refused") {
    const Logged logged = with_fault({run::FaultKind::stuck, 4.0, 0.4, "seat_adc"});
    CHECK_THROWS_WITH(logged.rows(), Catch::Contains("seat_adc"));
  }
}

TEST_CASE("numbered columns stand at their numbers, without a header", "[sim]") {
  Logged logged;
  auto& bike = logged.scene.bike;
  bike.log.time->column = {"", 2};
  bike.log.speed.reset();
  bike.front->sensor.column = {"", 5};
  bike.rear->sensor.column = {"", 1};
  const auto rows = logged.rows();
  CHECK(rows[0].size() == 5);
  CHECK(rows[1][1] == "2000");
  SECTION("two on one place are refused") {
    bike.rear->sensor.column = {"", 5};
    CHECK_THROWS_AS(logged.rows(), core::JobError);
  }
}

TEST_CASE("extra readings have the decimals that were asked for", "[sim]") {
  Logged logged;
  logged.scene.logger.extra_columns = {"supply"};
  logged.scene.logger.extra_decimals = 3;
  const auto rows = logged.rows();
  const std::string& cell = rows[5].back();
  CHECK(cell.size() - cell.find('.') == 4);
  CHECK(rows[5][1].find('.') == std::string::npos);
}

TEST_CASE("a ride is written whole: log, bike, truth", "[sim]") {
  Logged logged;
  logged.scene.logger.extra_columns = {"gear", "temp"};
  const Folder out;
  const auto paths = write_ride(logged.scene, logged.truth, out.file("ride"));
  REQUIRE(paths.size() == 4);
  CHECK(out.read("ride/bike.toml") == bike_text);
  CHECK(rows_of(out.read("ride/log.csv"))[7].size() == 6);
  const auto truth = rows_of(out.read("ride/truth.csv"));
  CHECK(truth.size() - 1 == logged.truth.samples());
  CHECK(truth[0][5] == "rear_travel_mm");
  CHECK(std::stod(truth[3001][1]) ==
        Approx(1e3 * logged.truth.front->travel_m[3000]).margin(0.51e-4));
  CHECK(out.read("ride/truth.toml").find("closing_speed_mm_s") != std::string::npos);
  for (const auto& entry : std::filesystem::directory_iterator(out.file("ride")))
    CHECK(entry.path().extension() != ".part");
}

TEST_CASE("a folder that cannot be written is a job error", "[sim]") {
  const Logged logged;
  const Folder out;
  out.write("ride", "a file where a folder should be");
  CHECK_THROWS_AS(write_ride(logged.scene, logged.truth, out.file("ride")), core::JobError);
}

TEST_CASE("an accelerometer on the sprung side logs what it feels", "[sim]") {
  Logged logged;
  logged.scene.bike.front->sprung_accel = bike::SprungAccel{{"fork_az", 0}, true, true};
  logged.scene.bike.rear->sprung_accel = bike::SprungAccel{{"shock_az", 0}, false, false};
  const auto rows = logged.rows();
  CHECK(rows[0] == std::vector<std::string>{"t_us", "fork_adc", "shock_adc", "wheel_kmh", "fork_az",
                                            "shock_az"});
  // At rest; the model starts within its friction.
  CHECK(std::stod(rows[100][4]) == Approx(1.0).margin(0.01));
  CHECK(std::stod(rows[100][5]) == Approx(-9.80665).margin(0.1));
  // 500 Hz from 1 kHz truth: every other sample, to four decimals.
  for (std::size_t i = 1; i < rows.size(); i += 97)
    CHECK(std::stod(rows[i][4]) * 9.80665 ==
          Approx(logged.truth.front->felt_m_s2[2 * (i - 1)]).margin(6e-4));
}

TEST_CASE("the other columns do not know that an accelerometer is logged", "[sim]") {
  Logged logged;
  logged.scene.logger.noise_counts = 1.5;
  const auto without = logged.rows();
  logged.scene.bike.front->sprung_accel = bike::SprungAccel{{"fork_az", 0}, true, true};
  logged.scene.logger.sprung_accel.noise_g = 0.1;
  const auto with = logged.rows();
  REQUIRE(with.size() == without.size());
  for (std::size_t i = 0; i < with.size(); i += 101)
    for (std::size_t c = 0; c < 4; ++c) CHECK(with[i][c] == without[i][c]);
}

TEST_CASE("an accelerometer has a zero, a noise and a range", "[sim]") {
  Logged logged;
  logged.scene.bike.front->sprung_accel = bike::SprungAccel{{"fork_az", 0}, true, true};
  logged.scene.logger.sprung_accel = {.bias_g = 0.1, .range_g = 2.0, .decimals = 2};
  double least = 9.0, most = -9.0;
  const auto rows = logged.rows();
  for (std::size_t i = 1; i < rows.size(); ++i) {
    least = std::min(least, std::stod(rows[i][4]));
    most = std::max(most, std::stod(rows[i][4]));
  }
  CHECK(std::stod(rows[100][4]) == Approx(1.1).margin(0.01));
  CHECK(most == 2.0);
  CHECK(least < 0.5);
}
