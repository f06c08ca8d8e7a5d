// The parts of a bike file, one reader a table. Each throws core::InputError where it stands.
#pragma once

#include <optional>
#include <string_view>

#include "clickwise/bike/bike.hpp"
#include "clickwise/bike/bike_file.hpp"
#include "clickwise/io/toml.hpp"

namespace clickwise::bike {

// A quantity that may be written in either of two units, never in both.
struct TwoUnits {
  std::string_view key;  // in the usual unit
  double si_per_unit;
  std::string_view trade_key;
  double si_per_trade_unit;
  io::Limits limits;  // in the usual unit
};

// The quantity in SI; empty when neither key is there.
std::optional<double> read_either(const io::TomlTable& table, const TwoUnits& quantity);
double need_either(const io::TomlTable& table, const TwoUnits& quantity);

TwoUnits mass(std::string_view key, std::string_view trade_key, double least_kg, double most_kg,
              double example_kg);

constexpr long long most_columns = 100000;

ColumnRef read_column(const io::TomlTable& table);
LogFormat read_log(const io::TomlTable& root);
Aims read_aims(const io::TomlTable& root);
// Reads the end's sensor: a potentiometer, an IMU pair, or a potentiometer with an `imu` table.
void read_sensor(const io::TomlTable& table, End& end);
ImuPair read_imu_pair(const io::TomlTable& table);
Accelerometer read_hand_accel(const io::TomlTable& table);
double read_accel_unit(const io::TomlTable& table, const char* key);  // m/s^2 per "g" or "m/s2"
Spring read_spring(const io::TomlTable& spring, double stroke_m);
Damper read_damper(const io::TomlTable& damper, const FilesBeside& beside);

// Reads the dyno table in damper.text, that of the file at `path`, and counts the adjusters that
// the bike file does not count by the table's columns. The file must be CSV with the columns
// velocity_mm_s and force_n and one for each adjuster that was turned; blank lines and lines that
// begin with '#' are skipped. Rows at rest are left out, with a note. Throws core::InputError with
// the table's line for the first thing wrong.
void read_dyno_table(const std::string& path, DynoDamper& damper);

End read_end(const io::TomlTable& end, const FilesBeside& beside);

}  // namespace clickwise::bike
