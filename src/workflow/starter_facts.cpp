#include "starter_facts.hpp"

#include <algorithm>
#include <array>
#include <cctype>
#include <cmath>
#include <optional>
#include <string>
#include <vector>

#include "clickwise/core/units.hpp"

namespace clickwise::workflow {

namespace {

bike::ColumnRef reference(const logs::ColumnFacts& column) {
  return column.name.empty() ? bike::ColumnRef{"", column.number} : bike::ColumnRef{column.name, 0};
}

std::string lower_case(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(),
                 [](unsigned char letter) { return static_cast<char>(std::tolower(letter)); });
  return text;
}

bool names_any(const std::string& name, const std::vector<std::string>& words) {
  const std::string small = lower_case(name);
  return std::any_of(words.begin(), words.end(), [&](const std::string& word) {
    return small.find(word) != std::string::npos;
  });
}

bool is_speed(const std::string& name) {
  return names_any(name, {"speed", "kmh", "km_h", "km/h", "kph"});
}

bool is_travel(const std::string& name) {
  return names_any(name, {"fork", "shock", "front", "rear", "travel", "susp", "pot", "adc"});
}

// Counts of an analogue-to-digital converter: whole numbers from 0 that use a good part of its
// range; 0 where they are none.
int converter_bits(const logs::ColumnFacts& column) {
  if (column.resolution < 1.0 || std::fmod(column.resolution, 1.0) != 0.0 || column.least < 0.0)
    return 0;
  for (const int bits : {8, 10, 12, 14, 16})
    if (column.most < std::ldexp(1.0, bits)) return column.most >= 100.0 ? bits : 0;
  return 0;
}

using Triple = std::array<std::size_t, 3>;

// The columns whose names differ from this one's in y and z for an x.
std::optional<Triple> triple_from(const std::vector<logs::ColumnFacts>& columns,
                                  std::size_t first) {
  const std::string name = columns[first].name;
  const auto column_of = [&](const std::string& wanted) {
    const auto found = std::find_if(columns.begin(), columns.end(),
                                    [&](const auto& column) { return column.name == wanted; });
    return static_cast<std::size_t>(found - columns.begin());
  };
  for (std::size_t at = 0; at < name.size(); ++at) {
    if (name[at] != 'x' && name[at] != 'X') continue;
    std::string y = name, z = name;
    y[at] = static_cast<char>(name[at] + 1);
    z[at] = static_cast<char>(name[at] + 2);
    const Triple triple{first, column_of(y), column_of(z)};
    if (triple[1] < columns.size() && triple[2] < columns.size()) return triple;
  }
  return std::nullopt;
}

double length_of_means(const std::vector<logs::ColumnFacts>& columns, const Triple& triple) {
  double squares = 0.0;
  for (const std::size_t k : triple) squares += columns[k].mean * columns[k].mean;
  return std::sqrt(squares);
}

bool is_gyro_name(const std::string& name) {
  const std::string small = lower_case(name);
  return names_any(small, {"gyr", "omega", "angular", "deg", "dps", "rad"}) ||
         small.starts_with('g') || small.starts_with('w');
}

bool is_accelerometer_name(const std::string& name) {
  const std::string small = lower_case(name);
  return names_any(small, {"acc", "force"}) || small.starts_with('a');
}

constexpr double g_m_s2 = core::standard_gravity_m_s2;
constexpr double gravity_least = 0.5;  // of g
constexpr double gravity_most = 1.5;

bool is_about(double length, double one_g) {
  return length > gravity_least * one_g && length < gravity_most * one_g;
}

std::string gyro_unit(const std::vector<logs::ColumnFacts>& columns, const Triple& triple) {
  constexpr double full_scale_rad_s = 35.0;
  constexpr double largest_rms_rad_s = 6.0;
  double most = 0.0, squares = 0.0;
  for (const std::size_t k : triple) {
    most = std::max({most, std::abs(columns[k].least), std::abs(columns[k].most)});
    squares += columns[k].deviation * columns[k].deviation;
  }
  return most > full_scale_rad_s || std::sqrt(squares) > largest_rms_rad_s ? "deg/s" : "rad/s";
}

std::vector<bike::StarterImu> find_imus(const std::vector<logs::ColumnFacts>& columns,
                                        std::vector<bool>& taken) {
  std::vector<bike::StarterImu> imus;
  for (std::size_t i = 0; i < columns.size(); ++i) {
    const auto triple = triple_from(columns, i);
    if (!triple) continue;
    const double length = length_of_means(columns, *triple);
    const bool gyro_named = is_gyro_name(columns[i].name);
    const bool gravity = is_about(length, 1.0) || is_about(length, g_m_s2);
    const bool accelerometer = is_accelerometer_name(columns[i].name) || (gravity && !gyro_named);
    if (!accelerometer && !gyro_named) continue;
    bike::StarterImu imu;
    imu.accelerometer = accelerometer;
    for (std::size_t k = 0; k < 3; ++k) {
      imu.columns[k] = reference(columns[(*triple)[k]]);
      taken[(*triple)[k]] = true;
    }
    imu.size = length;
    if (accelerometer)
      imu.unit = is_about(length, g_m_s2) ? "m/s2" : is_about(length, 1.0) ? "g" : "?";
    else
      imu.unit = gyro_unit(columns, *triple);
    imus.push_back(imu);
  }
  return imus;
}

}  // namespace

bike::StarterFacts starter_facts(const logs::LogFacts& facts) {
  bike::StarterFacts starter;
  starter.hdf5_group = facts.hdf5_group;
  std::vector<bool> in_imu(facts.columns.size(), false);
  starter.imus = find_imus(facts.columns, in_imu);
  starter.log_name = facts.name;
  if (facts.time && facts.time->unit != "date") {
    starter.time = reference(facts.columns[facts.time->column]);
    starter.time_unit = facts.time->unit;
  }
  std::vector<bike::StarterColumn> others;
  for (std::size_t i = 0; i < facts.columns.size(); ++i) {
    const logs::ColumnFacts& column = facts.columns[i];
    if (column.kind != logs::ColumnKind::number || in_imu[i] ||
        (facts.time && facts.time->column == i))
      continue;
    if (is_speed(column.name)) {
      if (!starter.speed) {
        starter.speed = reference(column);
        starter.speed_unit = names_any(column.name, {"m/s", "m_s", "mps"}) ? "m/s" : "km/h";
      }
      continue;
    }
    (is_travel(column.name) ? starter.candidates : others)
        .push_back({reference(column), column.least, column.most, converter_bits(column)});
  }
  starter.candidates.insert(starter.candidates.end(), others.begin(), others.end());
  return starter;
}

}  // namespace clickwise::workflow
