// The ride cut into blocks of riding time, the units of its bootstrap.
#pragma once

#include <cstddef>
#include <functional>
#include <vector>

#include "clickwise/advice/end_ride.hpp"

namespace clickwise::advice {

struct Block {
  std::size_t begin = 0;  // samples [begin, end)
  std::size_t end = 0;
  double seconds = 0.0;  // counted time in it
};

// Blocks of 5 s of counted time; a last one of under half that joins the one before.
std::vector<Block> blocks_of(const EndRide& ride);

struct Sampled {
  double value = 0.0;  // over the whole ride
  double low = 0.0;    // 90 % interval
  double high = 0.0;
  double error = 0.0;  // standard error
};

// A figure of a ride, given how often each block counts.
using BlockFigure = std::function<double(const std::vector<int>& times)>;

// The figure with every block counted once, and its spread over 400 resamplings of the blocks.
Sampled bootstrap(std::size_t blocks, unsigned seed, const BlockFigure& figure);

}  // namespace clickwise::advice
