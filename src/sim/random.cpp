#include "clickwise/sim/random.hpp"

#include <cmath>
#include <numbers>

namespace clickwise::sim {

namespace {

// Finaliser of the splitmix64 generator (Steele, Lea and Flood, OOPSLA 2014): neighbouring seeds
// and streams end far apart.
std::uint64_t mixed(std::uint64_t bits) {
  bits += 0x9e3779b97f4a7c15ULL;
  bits = (bits ^ (bits >> 30)) * 0xbf58476d1ce4e5b9ULL;
  bits = (bits ^ (bits >> 27)) * 0x94d049bb133111ebULL;
  return bits ^ (bits >> 31);
}

}  // namespace

Random::Random(std::uint64_t seed, std::uint64_t stream) : engine_(mixed(seed + mixed(stream))) {}

double Random::uniform() {
  return static_cast<double>(engine_() >> 11) * 0x1p-53;
}

double Random::normal() {
  if (has_spare_) {
    has_spare_ = false;
    return spare_;
  }
  const double radius = std::sqrt(-2.0 * std::log(1.0 - uniform()));
  const double angle = 2.0 * std::numbers::pi * uniform();
  spare_ = radius * std::sin(angle);
  has_spare_ = true;
  return radius * std::cos(angle);
}

}  // namespace clickwise::sim
