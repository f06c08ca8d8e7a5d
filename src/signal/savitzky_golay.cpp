#include "clickwise/signal/savitzky_golay.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numbers>
#include <stdexcept>

namespace clickwise::signal {

namespace {

// Value and derivatives 0 ... derivative, at one place, of the polynomials that are orthonormal on
// t = -half ... half, with those polynomials' values on the grid.
struct Orthonormal {
  std::vector<double> on_grid;
  std::vector<double> at;  // q, q', q'', ... there
};

double dot(const std::vector<double>& a, const std::vector<double>& b) {
  double sum = 0.0;
  for (std::size_t i = 0; i < a.size(); ++i) sum += a[i] * b[i];
  return sum;
}

void scale_by(Orthonormal& q, double factor) {
  for (double& value : q.on_grid) value *= factor;
  for (double& value : q.at) value *= factor;
}

void add(Orthonormal& q, const Orthonormal& other, double factor) {
  for (std::size_t i = 0; i < q.on_grid.size(); ++i) q.on_grid[i] += factor * other.on_grid[i];
  for (std::size_t i = 0; i < q.at.size(); ++i) q.at[i] += factor * other.at[i];
}

// t q, by the product rule (t q)^(d) = t q^(d) + d q^(d-1).
Orthonormal times_t(const Orthonormal& q, double unit, double at) {
  Orthonormal result = q;
  const double half = 0.5 * static_cast<double>(q.on_grid.size() - 1);
  for (std::size_t i = 0; i < q.on_grid.size(); ++i) {
    result.on_grid[i] *= (static_cast<double>(i) - half) * unit;
  }
  for (std::size_t d = q.at.size(); d-- > 0;) {
    result.at[d] = at * unit * q.at[d] + (d > 0 ? static_cast<double>(d) * q.at[d - 1] : 0.0);
  }
  return result;
}

// Stieltjes' procedure with each polynomial made orthogonal twice to all before it, t in units of
// half the span.
std::vector<Orthonormal> orthonormal_basis(const SavitzkyGolay& filter, double unit, double at) {
  const auto n = static_cast<std::size_t>(filter.span);
  Orthonormal next{std::vector<double>(n, 1.0),
                   std::vector<double>(static_cast<std::size_t>(filter.derivative) + 1, 0.0)};
  next.at[0] = 1.0;
  std::vector<Orthonormal> basis;
  for (int degree = 0; degree <= filter.degree; ++degree) {
    for (int round = 0; round < 2; ++round) {
      for (const Orthonormal& q : basis) add(next, q, -dot(next.on_grid, q.on_grid));
    }
    scale_by(next, 1.0 / std::sqrt(dot(next.on_grid, next.on_grid)));
    basis.push_back(next);
    next = times_t(next, unit, at);
  }
  return basis;
}

// One end: the polynomial of the first (or last) full span at each of its outer samples.
void fit_edges(const SavitzkyGolay& filter, std::span<const double> values,
               std::vector<double>& result) {
  const auto n = static_cast<std::size_t>(filter.span);
  const std::size_t half = n / 2;
  const std::span<const double> head = values.first(n);
  const std::span<const double> tail = values.last(n);
  for (std::size_t i = 0; i < half; ++i) {
    const double at = static_cast<double>(half - i);
    const std::vector<double> before = coefficients(filter, -at);
    const std::vector<double> after = coefficients(filter, at);
    double first = 0.0, last = 0.0;
    for (std::size_t j = 0; j < n; ++j) {
      first += before[j] * head[j];
      last += after[j] * tail[j];
    }
    result[i] = first;
    result[values.size() - 1 - i] = last;
  }
}

}  // namespace

void SavitzkyGolay::validate() const {
  const auto refuse = [](const char* name, double value, const char* rule) {
    throw std::invalid_argument(fmt::format("{} = {}; must be {}", name, value, rule));
  };
  if (degree < 0) refuse("degree", degree, "0 or more");
  if (span % 2 == 0 || span <= degree) refuse("span", span, "odd and above the degree");
  if (derivative < 0 || derivative > degree) refuse("derivative", derivative, "0 to the degree");
  if (!(interval_s > 0.0)) refuse("interval_s", interval_s, "above 0");
}

std::vector<double> coefficients(const SavitzkyGolay& filter, double at) {
  filter.validate();
  const double unit = 1.0 / std::max(1.0, 0.5 * (filter.span - 1));
  const double scale = std::pow(unit / filter.interval_s, filter.derivative);
  std::vector<double> result(static_cast<std::size_t>(filter.span), 0.0);
  for (const Orthonormal& q : orthonormal_basis(filter, unit, at)) {
    for (std::size_t i = 0; i < result.size(); ++i) {
      result[i] += scale * q.at.back() * q.on_grid[i];
    }
  }
  return result;
}

double noise_gain(const std::vector<double>& coefficients) {
  return std::sqrt(dot(coefficients, coefficients));
}

std::complex<double> frequency_response(const SavitzkyGolay& filter, double frequency_hz) {
  const std::vector<double> c = coefficients(filter);
  const double w = 2.0 * std::numbers::pi * frequency_hz * filter.interval_s;
  const double half = 0.5 * (filter.span - 1);
  std::complex<double> sum = 0.0;
  for (std::size_t j = 0; j < c.size(); ++j) {
    sum += c[j] * std::polar(1.0, w * (static_cast<double>(j) - half));
  }
  return sum;
}

std::vector<double> filtered(const SavitzkyGolay& filter, std::span<const double> values) {
  const std::vector<double> c = coefficients(filter);
  if (values.size() < c.size()) {
    throw std::invalid_argument(
        fmt::format("values holds {} samples; must hold at least {}", values.size(), c.size()));
  }
  if (!std::all_of(values.begin(), values.end(), [](double y) { return std::isfinite(y); })) {
    throw std::invalid_argument("values holds NaN or infinity; must be finite");
  }
  std::vector<double> result(values.size());
  for (std::size_t i = 0; i + c.size() <= values.size(); ++i) {
    double sum = 0.0;
    for (std::size_t j = 0; j < c.size(); ++j) sum += c[j] * values[i + j];
    result[i + c.size() / 2] = sum;
  }
  fit_edges(filter, values, result);
  return result;
}

}  // namespace clickwise::signal
