#include "clickwise/signal/spectrum.hpp"

#include <fftw3.h>
#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <memory>
#include <mutex>
#include <numbers>
#include <stdexcept>

#include "fft_planner.hpp"

namespace clickwise::signal {

namespace {

class RealTransform {
public:
  explicit RealTransform(std::size_t n)
      : input_(fftw_alloc_real(n)), output_(fftw_alloc_complex(n / 2 + 1)) {
    const std::lock_guard lock(fft_planner());
    plan_ = fftw_plan_dft_r2c_1d(static_cast<int>(n), input_.get(), output_.get(), FFTW_ESTIMATE);
  }
  ~RealTransform() {
    const std::lock_guard lock(fft_planner());
    fftw_destroy_plan(plan_);
  }
  RealTransform(const RealTransform&) = delete;
  RealTransform& operator=(const RealTransform&) = delete;

  double* input() { return input_.get(); }
  void run() { fftw_execute(plan_); }
  double power(std::size_t bin) const {
    const fftw_complex& value = output_.get()[bin];
    return value[0] * value[0] + value[1] * value[1];
  }

private:
  struct Free {
    void operator()(void* memory) const { fftw_free(memory); }
  };
  std::unique_ptr<double[], Free> input_;
  std::unique_ptr<fftw_complex[], Free> output_;
  fftw_plan plan_;
};

// Coefficients a_j of sum_j (-1)^j a_j cos(2 pi j i / n) (Harris 1978; flat top: G. D'Antona and
// A. Ferrero, Digital Signal Processing for Measurement Systems, 2006).
std::vector<double> cosines(Window window) {
  switch (window) {
    case Window::rectangle:
      return {1.0};
    case Window::hann:
      return {0.5, 0.5};
    case Window::hamming:
      return {0.54, 0.46};
    case Window::blackman:
      return {0.42, 0.50, 0.08};
    case Window::blackman_harris:
      return {0.35875, 0.48829, 0.14128, 0.01168};
    case Window::flat_top:
      return {0.21557895, 0.41663158, 0.277263158, 0.083578947, 0.006947368};
  }
  return {1.0};
}

double sum_of_squares(const std::vector<double>& values) {
  double sum = 0.0;
  for (const double value : values) sum += value * value;
  return sum;
}

// Median over mean of the average of n exponential values: sum_(i=1..n) (-1)^(i+1) / i, n odd; the
// median of an even number leans on n - 1 (Allen et al. 2012, appendix B).
double median_bias(std::size_t n) {
  double bias = 0.0;
  for (std::size_t i = 1; i <= (n % 2 == 0 ? n - 1 : n); ++i) {
    bias += (i % 2 == 1 ? 1.0 : -1.0) / static_cast<double>(i);
  }
  return bias;
}

double middle(std::vector<double>& values) {
  const auto half = values.begin() + static_cast<std::ptrdiff_t>(values.size() / 2);
  std::nth_element(values.begin(), half, values.end());
  if (values.size() % 2 == 1) return *half;
  return 0.5 * (*half + *std::max_element(values.begin(), half));
}

// One windowed segment into the transform's input.
void load(std::span<const double> segment, const std::vector<double>& weight, bool remove_mean,
          double* input) {
  double mean = 0.0;
  for (const double value : segment) mean += value / static_cast<double>(segment.size());
  for (std::size_t i = 0; i < segment.size(); ++i) {
    input[i] = weight[i] * (remove_mean ? segment[i] - mean : segment[i]);
  }
}

}  // namespace

std::vector<double> weights(Window window, std::size_t n) {
  const std::vector<double> a = cosines(window);
  std::vector<double> result(n, 0.0);
  for (std::size_t i = 0; i < n; ++i) {
    const double turn = 2.0 * std::numbers::pi * static_cast<double>(i) / static_cast<double>(n);
    for (std::size_t j = 0; j < a.size(); ++j) {
      result[i] += (j % 2 == 0 ? a[j] : -a[j]) * std::cos(static_cast<double>(j) * turn);
    }
  }
  return result;
}

double noise_bandwidth_bins(const std::vector<double>& weights) {
  double sum = 0.0;
  for (const double value : weights) sum += value;
  return static_cast<double>(weights.size()) * sum_of_squares(weights) / (sum * sum);
}

void WelchOptions::validate() const {
  constexpr std::size_t longest = std::size_t{1} << 24;
  if (segment < 2 || segment > longest) {
    throw std::invalid_argument(fmt::format("segment = {}; must be 2 to {}", segment, longest));
  }
  if (overlap >= segment) {
    throw std::invalid_argument(
        fmt::format("overlap = {}; must be below the segment ({})", overlap, segment));
  }
}

Spectrum welch(const std::vector<std::span<const double>>& stretches, double rate_hz,
               const WelchOptions& options) {
  options.validate();
  if (!(rate_hz > 0.0)) {
    throw std::invalid_argument(fmt::format("rate_hz = {}; must be above 0", rate_hz));
  }
  const std::size_t n = options.segment;
  const std::size_t bins = n / 2 + 1;
  const std::vector<double> weight = weights(options.window, n);
  RealTransform transform(n);
  std::vector<std::vector<double>> power(bins);
  for (const auto& stretch : stretches) {
    for (std::size_t first = 0; first + n <= stretch.size(); first += n - options.overlap) {
      load(stretch.subspan(first, n), weight, options.remove_mean, transform.input());
      transform.run();
      for (std::size_t bin = 0; bin < bins; ++bin) power[bin].push_back(transform.power(bin));
    }
  }
  Spectrum result{.bin_hz = rate_hz / static_cast<double>(n), .density = {}, .averages = 0};
  result.averages = power.front().size();
  if (result.averages == 0) return result;
  const double scale = 1.0 / (rate_hz * sum_of_squares(weight));
  for (std::size_t bin = 0; bin < bins; ++bin) {
    const bool alone = bin == 0 || 2 * bin == n;  // without a mirror image
    double sum = 0.0;
    for (const double value : power[bin]) sum += value;
    const double typical = options.median ? middle(power[bin]) / median_bias(result.averages)
                                          : sum / static_cast<double>(result.averages);
    result.density.push_back((alone ? 1.0 : 2.0) * scale * typical);
  }
  return result;
}

}  // namespace clickwise::signal
