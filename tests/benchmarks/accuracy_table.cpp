// Prints the table of docs/accuracy.md: velocity from invented rides with known truth, by rate and
// noise, beside a plain central difference.
#include <fmt/format.h>

#include "clickwise/core/units.hpp"
#include "support/invented_log.hpp"

using namespace clickwise;

int main() {
  fmt::print(
      "| ride | end | rate, Hz | noise, counts | velocity error, % of rms | central difference, "
      "% | worst share error, points | rest: error / stated, mm/s | within 1, 2 sigma, % |\n"
      "| --- | --- | --- | --- | --- | --- | --- | --- | --- |\n");
  for (const char* name : {"practice-run/scene.toml", "bottom-out-count/scene.toml",
                           "two-setups/scene-a.toml", "two-setups/scene-b.toml"}) {
    for (const double rate_hz : {200.0, 500.0, 1000.0}) {
      sim::Scene scene = test::demo_scene(name);
      scene.logger.rate_hz = rate_hz;
      scene.logger.faults.clear();
      scene.logger.time_decimals = scene.logger.time_decimals > 0 ? 3 : 0;
      scene.speed.stand_before_s = 8.0;
      const sim::Truth truth = sim::simulate(scene);
      for (const double counts : {0.6, 2.5}) {
        scene.logger.noise_counts = counts;
        const workflow::Ride ride = test::log_and_load(scene, truth);
        for (const workflow::RideEnd& end : ride.ends) {
          const sim::EndTruth& end_truth = *truth.end(end.name);
          const test::MotionErrors errors =
              test::motion_errors(end, end_truth, truth.rate_hz, scene.speed.stand_before_s,
                                  test::noisy_readings_m(end, scene, end_truth, truth.rate_hz));
          fmt::print(
              "| {} | {} | {:.0f} | {} | {:.2f} | {:.1f} | {:.3f} | {:.2f} / {:.2f} | {:.0f}, "
              "{:.0f} |\n",
              scene.name, bike::part(end.name), rate_hz, counts, 100.0 * errors.velocity_share,
              100.0 * errors.central_difference_share, 100.0 * errors.worst_share_error,
              core::to_mm(errors.rest_error_m_s), core::to_mm(end.motion.velocity_noise_m_s),
              100.0 * errors.within_one_sigma, 100.0 * errors.within_two_sigma);
        }
      }
    }
  }
}
