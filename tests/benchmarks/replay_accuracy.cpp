// Prints the replay's table of docs/accuracy.md: predicted changes against true ones, over invented
// rides that the method was not tuned on. Arguments: seed of the set (default 61), rides (24),
// seconds of each (60).
#include <fmt/format.h>

#include <cstdlib>

#include "sim/replay_score.hpp"

using namespace clickwise;
using namespace clickwise::replay_rides;

namespace {

struct Bike {
  const char* words;
  WrongBike wrong;
};

void print(const char* words, const Score& score) {
  for (std::size_t m = 0; m < sim::metrics; ++m) {
    const auto& row = score.rows[m];
    const std::string sign =
        row.mattering > 0 ? fmt::format("{} of {}", row.right_sign, row.mattering) : "";
    fmt::print("| {} | {} | {:.1f} | {} | {:.0f} |\n", words,
               sim::to_string(static_cast<sim::Metric>(m)), 100.0 * row.relative_error(), sign,
               100.0 * row.coverage());
  }
}

}  // namespace

int main(int argc, char** argv) {
  const auto seed = static_cast<std::uint64_t>(argc > 1 ? std::atoi(argv[1]) : 61);
  const int rides = argc > 2 ? std::atoi(argv[2]) : 24;
  const double seconds = argc > 3 ? std::atof(argv[3]) : 60.0;
  constexpr Bike bikes[] = {{"right bike", {}},
                            {"mass - 15 %", {0.85, 1.0, 1.0}},
                            {"mass + 15 %", {1.15, 1.0, 1.0}},
                            {"tyre - 20 %", {1.0, 0.8, 1.0}},
                            {"tyre + 20 %", {1.0, 1.2, 1.0}},
                            {"friction x 0.3", {1.0, 1.0, 0.3}},
                            {"friction x 2", {1.0, 1.0, 2.0}},
                            {"no friction given", {1.0, 1.0, 0.0}}};
  std::array<Score, std::size(bikes)> scores;
  for (int number = 0; number < rides; ++number) {
    const Case made = case_number(number, seed, seconds);
    for (std::size_t b = 0; b < std::size(bikes); ++b) {
      const auto result = score_case(made, bikes[b].wrong, scores[b]);
      if (b == 0)
        fmt::print("{}: {:.0f} % airborne, modelled travel {:.2f} mm rms off, carried {:.3f}\n",
                   made.ride.name, 100.0 * result.airborne_share, 1e3 * result.travel_rms_m,
                   result.carried_share);
    }
  }
  fmt::print(
      "\n| bike file | figure | rms error, % of rms change | sign right | in 90 % bounds, % |\n"
      "| --- | --- | --- | --- | --- |\n");
  for (std::size_t b = 0; b < std::size(bikes); ++b) print(bikes[b].words, scores[b]);
}
