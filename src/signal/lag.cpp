#include "clickwise/signal/lag.hpp"

#include <fftw3.h>

#include <algorithm>
#include <cmath>
#include <complex>
#include <memory>
#include <stdexcept>

#include "fft_planner.hpp"

namespace clickwise::signal {

namespace {

struct Free {
  void operator()(void* memory) const { fftw_free(memory); }
};
using Reals = std::unique_ptr<double[], Free>;
using Complexes = std::unique_ptr<fftw_complex[], Free>;

// The mean taken off, NaN as 0, zeros behind; returns the sum of squares.
double load(std::span<const double> series, double* into, std::size_t size) {
  double sum = 0.0;
  double count = 0.0;
  for (const double value : series)
    if (std::isfinite(value)) {
      sum += value;
      count += 1.0;
    }
  const double mean = count > 0.0 ? sum / count : 0.0;
  double squares = 0.0;
  for (std::size_t i = 0; i < size; ++i) {
    into[i] = i < series.size() && std::isfinite(series[i]) ? series[i] - mean : 0.0;
    squares += into[i] * into[i];
  }
  return squares;
}

class Correlator {
public:
  explicit Correlator(std::size_t size)
      : size_(size),
        real_(fftw_alloc_real(size)),
        first_(fftw_alloc_complex(size / 2 + 1)),
        second_(fftw_alloc_complex(size / 2 + 1)) {
    const std::lock_guard lock(fft_planner());
    const int n = static_cast<int>(size);
    forward_ = fftw_plan_dft_r2c_1d(n, real_.get(), first_.get(), FFTW_ESTIMATE);
    backward_ = fftw_plan_dft_c2r_1d(n, first_.get(), real_.get(), FFTW_ESTIMATE);
  }
  ~Correlator() {
    const std::lock_guard lock(fft_planner());
    fftw_destroy_plan(forward_);
    fftw_destroy_plan(backward_);
  }
  Correlator(const Correlator&) = delete;
  Correlator& operator=(const Correlator&) = delete;

  // Adds sum_i early_i late_(i + lag) to each lag of `sums`, lags -most ... most.
  void add(std::span<const double> early, std::span<const double> late, std::size_t most,
           std::vector<double>& sums) {
    early_squares += load(early, real_.get(), size_);
    fftw_execute_dft_r2c(forward_, real_.get(), second_.get());
    late_squares += load(late, real_.get(), size_);
    fftw_execute_dft_r2c(forward_, real_.get(), first_.get());
    for (std::size_t i = 0; i <= size_ / 2; ++i) {
      const std::complex<double> a(second_[i][0], -second_[i][1]);
      const std::complex<double> product = a * std::complex<double>(first_[i][0], first_[i][1]);
      first_[i][0] = product.real();
      first_[i][1] = product.imag();
    }
    fftw_execute_dft_c2r(backward_, first_.get(), real_.get());
    for (std::size_t k = 0; k < sums.size(); ++k)
      sums[k] += real_[(k + size_ - most) % size_] / static_cast<double>(size_);
  }

  double early_squares = 0.0;
  double late_squares = 0.0;

private:
  std::size_t size_;
  Reals real_;
  Complexes first_;
  Complexes second_;
  fftw_plan forward_;
  fftw_plan backward_;
};

}  // namespace

Lag find_lag(const std::vector<std::span<const double>>& early,
             const std::vector<std::span<const double>>& late, std::size_t most_samples) {
  if (early.empty() || early.size() != late.size())
    throw std::invalid_argument("early, late = sizes differ; must be as many channels each");
  const std::size_t n = early.front().size();
  const std::size_t most = std::min(most_samples, n > 0 ? n - 1 : 0);
  std::size_t size = 16;
  while (size < n + most + 1) size *= 2;
  Correlator correlator(size);
  std::vector<double> sums(2 * most + 1, 0.0);
  for (std::size_t c = 0; c < early.size(); ++c) {
    if (early[c].size() != n || late[c].size() != n)
      throw std::invalid_argument("early, late = lengths differ; must be the same");
    correlator.add(early[c], late[c], most, sums);
  }
  if (!(correlator.early_squares > 0.0 && correlator.late_squares > 0.0)) return {};
  const auto peak = std::max_element(sums.begin(), sums.end(),
                                     [](double a, double b) { return std::abs(a) < std::abs(b); });
  const auto k = static_cast<std::size_t>(peak - sums.begin());
  double place = static_cast<double>(k);
  double height = sums[k];
  if (k > 0 && k + 1 < sums.size()) {
    const double bend = sums[k - 1] - 2.0 * sums[k] + sums[k + 1];
    const double slope = 0.5 * (sums[k + 1] - sums[k - 1]);
    if (bend != 0.0) {
      place -= slope / bend;
      height -= 0.5 * slope * slope / bend;
    }
  }
  return {place - static_cast<double>(most),
          height / std::sqrt(correlator.early_squares * correlator.late_squares),
          height / correlator.early_squares};
}

}  // namespace clickwise::signal
