#include "scene_readers.hpp"

namespace clickwise::sim {

namespace {

constexpr io::Limits speeds_m_s{.least = 0.0, .most = 60.0, .example = 7.0};
constexpr io::Limits standing_s{.least = 0.0, .most = 3600.0, .example = 6.0};
constexpr io::Limits rides_m{.least = 1.0, .most = 5e4, .example = 800.0};
constexpr io::Limits rides_s{.least = 0.1, .most = 7200.0, .example = 120.0};

core::Polyline read_speeds(const io::TomlValue& value) {
  std::vector<double> at;
  std::vector<double> speed;
  for (const auto& row : value.rows(2)) {
    if (!at.empty() && !(row[0] > at.back()))
      value.refuse("the first numbers must rise", "put the points in order, each place once");
    if (row[1] < speeds_m_s.least || row[1] > speeds_m_s.most)
      value.refuse("speeds must be 0 to 60 m/s", "write for example [[0, 6.0], [200, 9.0]]");
    at.push_back(row[0]);
    speed.push_back(row[1]);
  }
  return {std::move(at), std::move(speed)};
}

}  // namespace

SpeedPlan read_ride(const io::TomlTable& ride) {
  SpeedPlan plan;
  plan.place = ride.place();
  plan.length_m = ride.number("length_m", rides_m);
  plan.duration_s = ride.number("duration_s", rides_s);
  if (plan.length_m.has_value() == plan.duration_s.has_value())
    ride.refuse("needs exactly one of length_m and duration_s", "write for example length_m = 800");
  const auto over_time = ride.find("speed_over_time");
  const auto along = ride.find("speed");
  if (over_time && along)
    over_time->refuse("the speed is given along the trail already", "keep one of the two");
  plan.over_time = over_time.has_value();
  plan.speed_m_s =
      read_speeds(over_time ? *over_time : ride.need("speed", "speed = [[0, 6.0], [200, 9.0]]"));
  plan.pace = ride.number_or("pace", 1.0, {.least = 0.2, .most = 3.0, .example = 1.02});
  plan.stand_before_s = ride.number_or("stand_before_s", 0.0, standing_s);
  plan.stand_after_s = ride.number_or("stand_after_s", 0.0, standing_s);
  return plan;
}

Line read_line(const io::TomlTable& ride) {
  Line line;
  const auto table = ride.table("line");
  if (!table) return line;
  line.seed = read_seed(*table, 0);
  line.change = table->number_or("change", 0.15, {.least = 0.0, .most = 1.0, .example = 0.15});
  return line;
}

}  // namespace clickwise::sim
