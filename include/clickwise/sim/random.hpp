// Chance that gives the same numbers with every compiler and standard library.
#pragma once

#include <cstdint>
#include <random>

namespace clickwise::sim {

// std::mt19937_64 (its output is fixed by the C++ standard), turned into reals by our own rules
// (the standard's distributions are not fixed). `stream` keeps uses of one seed independent.
class Random {
public:
  explicit Random(std::uint64_t seed, std::uint64_t stream = 0);

  double uniform();  // [0, 1), 53 bits
  double normal();   // mean 0, deviation 1: Box and Muller, Ann. Math. Stat. 29:610-611 (1958)

private:
  std::mt19937_64 engine_;
  double spare_ = 0.0;
  bool has_spare_ = false;
};

}  // namespace clickwise::sim
