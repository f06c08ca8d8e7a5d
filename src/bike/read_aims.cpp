#include "bike_readers.hpp"

namespace clickwise::bike {

namespace {

constexpr io::Limits share{.least = 0.0, .most = 1.0, .example = 0.3};
constexpr io::Limits count{.least = 0.0, .most = 1000.0, .example = 1.0};

}  // namespace

Aims read_aims(const io::TomlTable& root) {
  Aims aims;
  const auto table = root.table("aims");
  if (!table) return aims;
  const auto read = [&table](const char* key, double& value, const io::Limits& limits) {
    value = table->number_or(key, value, limits);
  };
  read("bottom_outs_per_minute", aims.bottom_outs_per_minute, count);
  read("travel_mean_share_low", aims.travel_mean_share_low, share);
  read("travel_mean_share_high", aims.travel_mean_share_high, share);
  read("travel_used_share", aims.travel_used_share, share);
  read("packing_mm_per_hit", aims.packing_mm_per_hit, count);
  read("top_outs_per_minute", aims.top_outs_per_minute, count);
  read("body_damping_low", aims.body_damping_low, share);
  read("harsh_force_ratio", aims.harsh_force_ratio, count);
  read("held_share", aims.held_share, share);
  read("balance_share", aims.balance_share, share);
  if (aims.travel_mean_share_low >= aims.travel_mean_share_high)
    table->refuse("travel_mean_share_low must be below travel_mean_share_high",
                  "correct one of them; the one left out has its default");
  return aims;
}

}  // namespace clickwise::bike
