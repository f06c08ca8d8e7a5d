#include "reading_noise.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "clickwise/core/statistics.hpp"

namespace clickwise::signal {

namespace {

// Eighth differences pass white noise with the power C(16, 8) and hold motion back: -30 dB at a
// fifth of the rate against the mean over all frequencies, -110 dB at a twentieth.
constexpr std::array<double, 9> eighth{1, -8, 28, -56, 70, -56, 28, -8, 1};
constexpr double eighth_power = 12870.0;
// Independent values a sample in a mean of squared eighth differences of white noise:
// C(16, 8)^2 / sum over lags of their squared covariance, C(32, 16).
constexpr double freedom_a_sample = eighth_power * eighth_power / 601080390.0;

constexpr double block_s = 0.25;
constexpr std::size_t least_block = 32;

struct Block {
  double noise_power;  // m^2
  double spread;       // of the readings, m: largest less smallest
};

Block measure(std::span<const double> readings) {
  double sum = 0.0;
  for (std::size_t i = 0; i + eighth.size() <= readings.size(); ++i) {
    double d = 0.0;
    for (std::size_t j = 0; j < eighth.size(); ++j) d += eighth[j] * readings[i + j];
    sum += d * d;
  }
  const auto [low, high] = std::minmax_element(readings.begin(), readings.end());
  const auto terms = static_cast<double>(readings.size() + 1 - eighth.size());
  return {sum / terms / eighth_power, *high - *low};
}

std::vector<Block> measure_blocks(const std::vector<std::span<const double>>& stretches,
                                  double rate_hz) {
  const auto length = std::max(least_block, static_cast<std::size_t>(block_s * rate_hz));
  std::vector<Block> blocks;
  for (const auto& stretch : stretches) {
    if (stretch.size() < eighth.size()) continue;
    const std::size_t step = std::min(length, stretch.size());
    for (std::size_t first = 0; first + step <= stretch.size(); first += step) {
      blocks.push_back(measure(stretch.subspan(first, step)));
    }
  }
  return blocks;
}

// The quiet quantile of a chi-square of this many degrees of freedom against its mean (E. B. Wilson
// and M. M. Hilferty, Proc. Nat. Acad. Sci. 17:684-688, 1931).
constexpr double quiet = 0.2;
double quiet_share(double freedom) {
  constexpr double normal_quantile = -0.841621233572914;
  const double variance = 2.0 / (9.0 * freedom);
  return std::pow(1.0 - variance + normal_quantile * std::sqrt(variance), 3.0);
}

double root_mean_power(const std::vector<Block>& blocks) {
  double sum = 0.0;
  for (const Block& block : blocks) sum += block.noise_power;
  return std::sqrt(sum / static_cast<double>(blocks.size()));
}

}  // namespace

ReadingNoise reading_noise(const std::vector<std::span<const double>>& stretches_m,
                           double rate_hz) {
  std::vector<Block> blocks = measure_blocks(stretches_m, rate_hz);
  if (blocks.empty()) return {};

  // White noise keeps its readings within eight deviations in most blocks; motion does not. The
  // deviation for that may be rough: the median block's.
  constexpr double still_spread = 8.0;
  std::vector<double> powers;
  for (const Block& block : blocks) powers.push_back(block.noise_power);
  const double rough_m = std::sqrt(core::median(powers));
  const auto moving = std::partition(blocks.begin(), blocks.end(), [&](const Block& block) {
    return block.spread <= still_spread * rough_m;
  });
  const std::vector<Block> still(blocks.begin(), moving);

  // Noise is read from the quiet ones of the moving blocks, since hits reach up to half of a slow
  // log's rate. A channel that is silent at rest still has its quantisation noise while it moves.
  powers.clear();
  for (auto block = moving; block != blocks.end(); ++block) powers.push_back(block->noise_power);
  if (powers.empty()) return {root_mean_power(still), root_mean_power(still)};
  const double length = std::max(static_cast<double>(least_block), block_s * rate_hz);
  const double riding_m =
      std::sqrt(core::quantile(powers, quiet) / quiet_share(freedom_a_sample * length));
  return {riding_m, still.empty() ? riding_m : std::min(riding_m, root_mean_power(still))};
}

}  // namespace clickwise::signal
