#include "clickwise/motion/riding.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace clickwise::motion {

namespace {

constexpr double block_s = 0.1;

enum class Block { unknown, rest, moving };

void check(const std::vector<const run::Motion*>& ends, std::span<const double> speed_m_s) {
  if (ends.empty()) throw std::invalid_argument("ends = 0; must be one or two");
  const std::size_t samples = ends.front()->time.samples;
  for (const run::Motion* end : ends)
    if (end->time.samples != samples || end->valid.size() != samples ||
        end->time.rate_hz != ends.front()->time.rate_hz)
      throw std::invalid_argument("ends with different time bases; must share one");
  if (!speed_m_s.empty() && speed_m_s.size() != samples)
    throw std::invalid_argument(
        fmt::format("speed_m_s = {} samples; must be {}", speed_m_s.size(), samples));
}

// Eq. M13 for one end over [begin, end).
Block state(const run::Motion& motion, std::size_t begin, std::size_t end,
            const RidingOptions& options) {
  double sum = 0.0;
  int valid = 0;
  for (std::size_t i = begin; i < end; ++i) {
    valid += motion.valid[i];
    sum += motion.valid[i] != 0 ? std::abs(motion.velocity_m_s[i]) : 0.0;
  }
  if (valid == 0) return Block::unknown;
  const auto count = static_cast<double>(valid);
  const double moving =
      std::max(options.moving_m_s, options.moving_noises * motion.velocity_noise_m_s);
  return sum > moving * count ? Block::moving : Block::rest;
}

Block state(const std::vector<const run::Motion*>& ends, std::span<const double> speed_m_s,
            std::size_t begin, std::size_t end, const RidingOptions& options) {
  Block block = Block::unknown;
  for (const run::Motion* motion : ends)
    block = std::max(block, state(*motion, begin, end, options));
  for (std::size_t i = begin; i < end && block != Block::moving && !speed_m_s.empty(); ++i)
    if (speed_m_s[i] > options.rolling_m_s) return Block::moving;
  return block;
}

// Clears the mask over rests that are too long.
void clear_standing(std::vector<std::uint8_t>& mask, const std::vector<Block>& blocks,
                    std::size_t block, double block_length_s, double longest_rest_s) {
  for (std::size_t begin = 0; begin < blocks.size();) {
    std::size_t end = begin;
    while (end < blocks.size() && blocks[end] != Block::moving) ++end;
    if (static_cast<double>(end - begin) * block_length_s > longest_rest_s)
      std::fill(mask.begin() + static_cast<std::ptrdiff_t>(begin * block),
                mask.begin() + static_cast<std::ptrdiff_t>(std::min(end * block, mask.size())),
                std::uint8_t{0});
    begin = end + 1;
  }
}

}  // namespace

std::vector<std::uint8_t> Riding::counted(const run::Motion& end) const {
  std::vector<std::uint8_t> both(mask.size());
  std::ranges::transform(mask, end.valid, both.begin(), [](std::uint8_t a, std::uint8_t b) {
    return static_cast<std::uint8_t>(a & b);
  });
  return both;
}

Riding riding(const std::vector<const run::Motion*>& ends, std::span<const double> speed_m_s,
              const RidingOptions& options) {
  check(ends, speed_m_s);
  const run::TimeBase& time = ends.front()->time;
  const auto block = std::max<std::size_t>(1, static_cast<std::size_t>(block_s * time.rate_hz));
  std::vector<Block> blocks;
  for (std::size_t begin = 0; begin < time.samples; begin += block)
    blocks.push_back(state(ends, speed_m_s, begin, std::min(begin + block, time.samples), options));
  Riding result;
  result.mask.resize(time.samples);
  for (const run::Motion* end : ends)
    std::ranges::transform(
        result.mask, end->valid, result.mask.begin(),
        [](std::uint8_t a, std::uint8_t b) { return static_cast<std::uint8_t>(a | b); });
  clear_standing(result.mask, blocks, block, static_cast<double>(block) * time.interval_s(),
                 options.longest_rest_s);
  result.riding_s = static_cast<double>(std::ranges::count(result.mask, 1)) * time.interval_s();
  return result;
}

}  // namespace clickwise::motion
