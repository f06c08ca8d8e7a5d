#include "clickwise/signal/smoother.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>

#include "adaptive.hpp"
#include "clickwise/core/statistics.hpp"
#include "clickwise/signal/savitzky_golay.hpp"
#include "reading_noise.hpp"

namespace clickwise::signal {

namespace {

void require_positive(const char* name, double value) {
  if (std::isfinite(value) && value > 0.0) return;
  throw std::invalid_argument(fmt::format("{} = {}; must be above 0", name, value));
}

void require_span(double span_s) {
  if (span_s > 0.0 && span_s <= longest_span_s) return;
  throw std::invalid_argument(
      fmt::format("fixed_span_s = {}; must be above 0 and at most {}", span_s, longest_span_s));
}

void require_finite(std::span<const double> readings_m) {
  const bool finite =
      std::all_of(readings_m.begin(), readings_m.end(), [](double y) { return std::isfinite(y); });
  if (!finite) throw std::invalid_argument("readings_m holds NaN or infinity; must be finite");
}

int odd_span(double span_s, double rate_hz) {
  const double half = std::round(0.5 * (span_s * rate_hz - 1.0));
  return 2 * static_cast<int>(std::max(1.0, half)) + 1;
}

SavitzkyGolay quadratic(const SmootherModel& model, int derivative) {
  return {.span = model.span_samples,
          .degree = 2,
          .derivative = derivative,
          .interval_s = 1.0 / model.rate_hz};
}

double half_gain_hz(const SavitzkyGolay& filter) {
  double low = 0.0;
  double high = 0.5 / filter.interval_s;
  const double step = high / (8.0 * filter.span);
  while (low + step < high && std::abs(frequency_response(filter, low + step)) > 0.5) low += step;
  return low + 0.5 * step;
}

double smooth_fixed(std::span<const double> readings_m, const SmootherModel& model,
                    const SmoothedSeries& out) {
  const SavitzkyGolay slope = quadratic(model, 1);
  std::ranges::copy(filtered(quadratic(model, 0), readings_m), out.position_m.begin());
  std::ranges::copy(filtered(slope, readings_m), out.velocity_m_s.begin());
  const std::size_t n = readings_m.size();
  const auto half = static_cast<std::size_t>(model.span_samples / 2);
  std::ranges::fill(out.sigma_m_s, model.noise_m * noise_gain(coefficients(slope)));
  for (std::size_t i = 0; i < half; ++i) {
    const double at = static_cast<double>(half) - static_cast<double>(i);
    const double sigma = model.noise_m * noise_gain(coefficients(slope, at));
    out.sigma_m_s[i] = sigma;
    out.sigma_m_s[n - 1 - i] = sigma;
  }
  return half_gain_hz(quadratic(model, 0));
}

double rest_velocity_noise(const SmootherModel& model, double rest_noise_m) {
  if (model.span_samples > 0) return rest_noise_m * noise_gain(coefficients(quadratic(model, 1)));
  return AdaptiveSmoother(model.rate_hz, model.noise_m, model.memory_s)
      .rest_velocity_noise(rest_noise_m);
}

}  // namespace

SmootherModel fit_smoother(const std::vector<std::span<const double>>& stretches_m, double rate_hz,
                           const SmootherOptions& options) {
  require_positive("rate_hz", rate_hz);
  require_positive("memory_s", options.memory_s);
  if (options.fixed_span_s) require_span(*options.fixed_span_s);
  for (const auto& stretch : stretches_m) require_finite(stretch);
  const ReadingNoise noise = reading_noise(stretches_m, rate_hz);
  SmootherModel model{.rate_hz = rate_hz, .noise_m = noise.riding_m, .memory_s = options.memory_s};
  if (options.fixed_span_s) model.span_samples = odd_span(*options.fixed_span_s, rate_hz);
  model.rest_velocity_noise_m_s = rest_velocity_noise(model, noise.resting_m);
  return model;
}

std::size_t shortest_stretch(const SmootherModel& model) {
  return model.span_samples > 0 ? static_cast<std::size_t>(model.span_samples)
                                : AdaptiveSmoother::shortest;
}

double smooth(std::span<const double> readings_m, const SmootherModel& model,
              const SmoothedSeries& out) {
  require_positive("rate_hz", model.rate_hz);
  require_finite(readings_m);
  const std::size_t n = readings_m.size();
  if (n < shortest_stretch(model)) {
    throw std::invalid_argument(fmt::format("readings_m holds {} samples; must hold at least {}", n,
                                            shortest_stretch(model)));
  }
  if (out.position_m.size() != n || out.velocity_m_s.size() != n || out.sigma_m_s.size() != n)
    throw std::invalid_argument(fmt::format("out must hold {} samples, as readings_m does", n));
  if (model.span_samples > 0) return smooth_fixed(readings_m, model, out);
  return AdaptiveSmoother(model.rate_hz, model.noise_m, model.memory_s).smooth(readings_m, out);
}

Smoothed smooth(std::span<const double> readings_m, const SmootherModel& model) {
  Smoothed out;
  out.position_m.resize(readings_m.size());
  out.velocity_m_s.resize(readings_m.size());
  out.sigma_m_s.resize(readings_m.size());
  out.cutoff_hz = smooth(readings_m, model, {out.position_m, out.velocity_m_s, out.sigma_m_s});
  return out;
}

std::string describe(const SmootherModel& model) {
  const double noise_um = model.noise_m * 1e6;
  if (model.span_samples > 0) {
    return fmt::format(
        "quadratic fits over {} samples ({:.1f} ms), as asked; a reading's noise is {:.1f} µm rms",
        model.span_samples, 1e3 * model.span_samples / model.rate_hz, noise_um);
  }
  return fmt::format(
      "adaptive spline smoother, its gains taken from the log; a reading's noise is {:.1f} µm rms",
      noise_um);
}

}  // namespace clickwise::signal
