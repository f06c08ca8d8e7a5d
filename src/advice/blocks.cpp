#include "blocks.hpp"

#include <cmath>
#include <random>

#include "clickwise/core/statistics.hpp"

namespace clickwise::advice {

namespace {
constexpr double block_s = 5.0;
constexpr int resamplings = 400;
}  // namespace

std::vector<Block> blocks_of(const EndRide& ride) {
  const double interval_s = ride.motion->time.interval_s();
  const auto full = static_cast<std::size_t>(std::ceil(block_s / interval_s));
  std::vector<Block> blocks;
  Block open;
  std::size_t counted = 0;
  for (const std::uint8_t one : *ride.counted) {
    counted += one;
    ++open.end;
    open.seconds = static_cast<double>(counted) * interval_s;
    if (counted < full) continue;
    blocks.push_back(open);
    open = {open.end, open.end, 0.0};
    counted = 0;
  }
  if (open.seconds >= 0.5 * block_s || blocks.empty()) {
    blocks.push_back(open);
  } else {
    blocks.back().end = open.end;
    blocks.back().seconds += open.seconds;
  }
  return blocks;
}

Sampled bootstrap(std::size_t blocks, unsigned seed, const BlockFigure& figure) {
  std::mt19937 generator(seed);
  std::vector<double> figures;
  figures.reserve(resamplings);
  for (int k = 0; k < resamplings; ++k) {
    std::vector<int> times(blocks, 0);
    for (std::size_t i = 0; i < blocks; ++i) ++times[generator() % blocks];
    figures.push_back(figure(times));
  }
  return {figure(std::vector<int>(blocks, 1)), core::quantile(figures, 0.05),
          core::quantile(figures, 0.95), core::mean_and_deviation(figures).deviation};
}

}  // namespace clickwise::advice
