#include <fmt/format.h>

#include <algorithm>

#include "clickwise/bike/bike_file.hpp"

namespace clickwise::bike {

namespace {

// A sentence for every end that lacks something, sorted by use: lowest first.
struct Missing {
  int order;
  std::string sentence;
};

void missing_at(const End& end, EndName name, std::vector<Missing>& all) {
  const std::string_view key = to_string(name);
  if (!end.damper)
    all.push_back({1, fmt::format("{}.damper brings the default split of the speed bands (the knee "
                                  "of its curve), joules in each band, the reach of each click and "
                                  "advice in clicks",
                                  key)});
  else if (std::holds_alternative<AssumedDamper>(*end.damper))
    all.push_back({6, fmt::format("{}.damper is assumed; kind = \"hydraulic\" with measured "
                                  "figures brings firmer advice",
                                  key)});
  if (!end.damper && !(end.split.compression_m_s && end.split.rebound_m_s))
    all.push_back({0, fmt::format("{}.split, or --split, brings the low-speed and high-speed bands "
                                  "as long as the damper is not known",
                                  key)});
  if (!end.spring)
    all.push_back({2, fmt::format("{}.spring brings replay, predictions of other settings, and sag "
                                  "in place of a guess",
                                  key)});
  if (!end.unsprung_mass_kg)
    all.push_back({3, fmt::format("{}.unsprung_mass_kg brings the sprung mass, which replay, "
                                  "predictions and the energy of bottom-outs need",
                                  key)});
  if (!end.sprung_accel)
    all.push_back({8, fmt::format("{}.sprung_accel, an accelerometer on the sprung side above the "
                                  "{}, brings the damper's curve and friction as ridden, and its "
                                  "fade",
                                  key, part(name))});
  if (!end.tyre)
    all.push_back({4, fmt::format("{}.tyre brings the ground under the wheel in replay; without it "
                                  "a usual tyre is assumed",
                                  key)});
}

void missing_of_bike(const Bike& bike, std::vector<Missing>& all) {
  for (const EndName name : both_ends)
    if (bike.end(name) && bike.end(name)->sprung_accel &&
        !(bike.end(name)->spring && bike.sprung_mass_kg(name)))
      all.push_back({2, fmt::format("{0}.sprung_accel is weighed against the spring and the sprung "
                                    "mass: {0}.spring and the masses bring the damper as ridden",
                                    to_string(name))});
  if (!bike.rider_mass_kg || !bike.chassis_mass_kg || !bike.front_share)
    all.push_back(
        {3, fmt::format("{} would give the sprung mass, which replay, predictions and the "
                        "energy of bottom-outs need",
                        !bike.rider_mass_kg     ? "rider.mass_kg"
                        : !bike.chassis_mass_kg ? "chassis.mass_kg"
                                                : "chassis.front_share")});
  if (!bike.log.speed)
    all.push_back({5,
                   "log.speed brings distance along the trail, pace, and standing time told "
                   "from riding slowly"});
  if (!bike.front || !bike.rear)
    all.push_back({7, fmt::format("[{}] brings the balance of front and rear, and airtime",
                                  bike.front ? "rear" : "front")});
}

}  // namespace

std::vector<std::string> what_is_missing(const Bike& bike) {
  std::vector<Missing> all;
  for (const EndName name : both_ends)
    if (bike.end(name)) missing_at(*bike.end(name), name, all);
  missing_of_bike(bike, all);
  std::stable_sort(all.begin(), all.end(),
                   [](const Missing& a, const Missing& b) { return a.order < b.order; });
  std::vector<std::string> sentences;
  for (Missing& one : all) sentences.push_back(std::move(one.sentence));
  return sentences;
}

}  // namespace clickwise::bike
