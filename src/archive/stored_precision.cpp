#include "clickwise/archive/run_archive.hpp"
#include "clickwise/core/units.hpp"
#include "names.hpp"

namespace clickwise::archive {

namespace {

double stored(double metres) {
  return core::from_mm(static_cast<double>(stored_mm(metres)));
}

void round_all(std::vector<double>& metres) {
  for (double& value : metres) value = stored(value);
}

// GCC 12.2 at -O3 makes one vector of two such neighbours and loses the rounding: this stays a
// call.
[[gnu::noinline]] double stored_scalar(double metres) {
  return stored(metres);
}

}  // namespace

void round_to_stored(run::Motion& motion) {
  round_all(motion.travel_m);
  round_all(motion.velocity_m_s);
  round_all(motion.velocity_sigma_m_s);
  motion.velocity_noise_m_s = stored_scalar(motion.velocity_noise_m_s);
  motion.reading_noise_m = stored_scalar(motion.reading_noise_m);
}

void round_to_stored(std::vector<double>& values) {
  for (double& value : values) value = static_cast<double>(static_cast<float>(value));
}

}  // namespace clickwise::archive
