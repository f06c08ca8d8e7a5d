#include "clickwise/signal/hampel.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace clickwise::signal {

namespace {

// The values of a moving window in order. A step costs one insertion and one removal.
class SortedWindow {
public:
  void add(double value) {
    values_.insert(std::upper_bound(values_.begin(), values_.end(), value), value);
  }

  void remove(double value) {
    values_.erase(std::lower_bound(values_.begin(), values_.end(), value));
  }

  void replace(double old, double value) {
    auto place = std::lower_bound(values_.begin(), values_.end(), old);
    for (; place + 1 != values_.end() && *(place + 1) < value; ++place) *place = *(place + 1);
    for (; place != values_.begin() && *(place - 1) > value; --place) *place = *(place - 1);
    *place = value;
  }

  double median() const {
    const std::size_t n = values_.size();
    return n % 2 == 1 ? values_[n / 2] : 0.5 * (values_[n / 2 - 1] + values_[n / 2]);
  }

  // Deviations from the median grow outwards from the middle on either side: merge the two sides.
  double median_absolute_deviation() const {
    const double centre = median();
    const std::size_t n = values_.size();
    std::size_t right = n / 2;
    std::size_t left = right;  // one past the next on the left
    double before = 0.0;
    double now = 0.0;
    for (std::size_t taken = 0; taken <= n / 2; ++taken) {
      before = now;
      const bool take_left =
          right == n || (left > 0 && centre - values_[left - 1] <= values_[right] - centre);
      now = take_left ? centre - values_[--left] : values_[right++] - centre;
    }
    return n % 2 == 1 ? now : 0.5 * (before + now);
  }

private:
  std::vector<double> values_;
};

}  // namespace

void HampelOptions::validate() const {
  if (half_width < 1) throw std::invalid_argument("half_width = 0; must be 1 or more");
  if (!(threshold >= 0.0)) {
    throw std::invalid_argument(fmt::format("threshold = {}; must be 0 or more", threshold));
  }
  if (!(least_scale >= 0.0)) {
    throw std::invalid_argument(fmt::format("least_scale = {}; must be 0 or more", least_scale));
  }
}

std::vector<std::size_t> hampel_spikes(std::span<const double> values,
                                       const HampelOptions& options) {
  options.validate();
  if (!std::all_of(values.begin(), values.end(), [](double y) { return std::isfinite(y); })) {
    throw std::invalid_argument("values holds NaN or infinity; must be finite");
  }
  const std::size_t n = values.size();
  const std::size_t half = options.half_width;
  std::vector<std::size_t> spikes;
  SortedWindow window;
  for (std::size_t i = 0; i < std::min(half, n); ++i) window.add(values[i]);
  for (std::size_t i = 0; i < n; ++i) {
    const bool grows = i + half < n;
    const bool shrinks = i > half;
    if (grows && shrinks) window.replace(values[i - half - 1], values[i + half]);
    if (grows && !shrinks) window.add(values[i + half]);
    if (!grows && shrinks) window.remove(values[i - half - 1]);
    const double off = std::abs(values[i] - window.median());
    if (off <= options.threshold * options.least_scale) continue;
    const double scale = mad_to_sigma * window.median_absolute_deviation();
    if (off > options.threshold * std::max(scale, options.least_scale)) spikes.push_back(i);
  }
  return spikes;
}

std::vector<double> window_medians(std::span<const double> values,
                                   const std::vector<std::size_t>& at, std::size_t half_width) {
  std::vector<double> medians;
  for (const std::size_t i : at) {
    const std::size_t first = i > half_width ? i - half_width : 0;
    const std::size_t last = std::min(values.size() - 1, i + half_width);
    SortedWindow window;
    for (std::size_t j = first; j <= last; ++j) window.add(values[j]);
    medians.push_back(window.median());
  }
  return medians;
}

}  // namespace clickwise::signal
