#include "clip_rebuild.hpp"

#include <algorithm>
#include <cmath>

namespace clickwise::motion {

namespace {

constexpr double reading_noise_m_s2 = 0.05;
constexpr double rough_share = 0.05;
constexpr double rough_memory = 8.0;  // samples
constexpr double most_rise_m_s2 = 600.0;
constexpr double rise_share = 0.8;
constexpr double rise_floor_m_s2 = 100.0;
constexpr double unusable_m_s2 = 100.0;
constexpr double pulled_m_s2 = -6.0;
constexpr double pushed_m_s2 = 60.0;

// Local mean square of the second difference, over some samples to both sides.
std::vector<double> roughness(const Axial& axial) {
  const std::size_t n = axial.upper_m_s2.size();
  std::vector<double> out(n, 0.0);
  const auto sweep = [&](auto index) {
    double mean = 0.0;
    for (std::size_t k = 1; k + 1 < n; ++k) {
      const std::size_t i = index(k);
      const auto relative = [&](std::size_t j) {
        return axial.lower_m_s2[j] - axial.upper_m_s2[j];
      };
      const double bend = relative(i - 1) - 2.0 * relative(i) + relative(i + 1);
      if (std::isfinite(bend)) mean += (bend * bend - mean) / rough_memory;
      out[i] += 0.5 * mean;
    }
  };
  sweep([](std::size_t k) { return k; });
  sweep([n](std::size_t k) { return n - 1 - k; });
  return out;
}

// The arch over one clipped run [begin, end).
void arch(const Axial& axial, std::size_t begin, std::size_t end, std::vector<double>& lower,
          std::vector<double>& variance) {
  const double sign = axial.clipped[begin] < 0 ? -1.0 : 1.0;
  const auto& y = axial.lower_m_s2;
  const auto slope = [&](std::size_t near, std::size_t far) {
    const double rise = sign * (y[near] - y[far]);
    return std::isfinite(rise) ? std::max(0.0, rise) : 0.0;
  };
  const double in = begin >= 2 ? slope(begin - 1, begin - 2) : 0.0;
  const double out = end + 1 < y.size() ? slope(end, end + 1) : 0.0;
  const double length = static_cast<double>(end - begin) + 1.0;
  const double mean_slope = 0.5 * std::min(in, out) + 0.25 * (in + out);
  const double rise = std::min(mean_slope * length / 4.0, most_rise_m_s2);
  const double sigma = rise_share * rise * 2.0 / 3.0 + rise_floor_m_s2;
  for (std::size_t i = begin; i < end; ++i) {
    const double u = static_cast<double>(i - begin + 1) / length;
    lower[i] = sign * axial.lower_range_m_s2 + sign * rise * 4.0 * u * (1.0 - u);
    variance[i] = sigma * sigma * length;
  }
}

// What the shaft's own force says of the wheel, where it is most of it.
void by_force(const Axial& axial, double mass_ratio, std::vector<double>& lower,
              std::vector<double>& variance) {
  for (std::size_t i = 0; i < lower.size(); ++i) {
    if (axial.clipped[i] != 1 && axial.clipped[i] != -1) continue;
    const double by_shaft = -mass_ratio * axial.upper_m_s2[i];
    const double range = axial.lower_range_m_s2;
    if (axial.clipped[i] > 0 && axial.upper_m_s2[i] < pulled_m_s2) {
      lower[i] = std::max(range, by_shaft);
      variance[i] = 3.0 * std::pow(0.1 * lower[i] + 20.0, 2);
    }
    if (axial.clipped[i] > 0) continue;
    const double lowest = std::min(-range, by_shaft);
    lower[i] = std::max(lower[i], lowest);
    if (axial.upper_m_s2[i] <= pushed_m_s2) continue;
    lower[i] = 0.8 * lowest - 0.2 * range;
    variance[i] = 3.0 * std::pow(0.3 * (-range - lowest) + 20.0, 2);
  }
}

}  // namespace

Rebuilt rebuild(const Axial& axial, std::optional<double> mass_ratio) {
  const std::size_t n = axial.upper_m_s2.size();
  std::vector<double> lower = axial.lower_m_s2;
  Rebuilt out;
  out.variance = roughness(axial);
  for (double& value : out.variance)
    value = reading_noise_m_s2 * reading_noise_m_s2 + rough_share * rough_share * value;
  for (std::size_t i = 0; i < n; ++i) {
    if (axial.clipped[i] == 2) out.variance[i] += unusable_m_s2 * unusable_m_s2;
    if (axial.clipped[i] != 1 && axial.clipped[i] != -1) continue;
    std::size_t end = i;
    while (end < n && axial.clipped[end] == axial.clipped[i]) ++end;
    arch(axial, i, end, lower, out.variance);
    i = end - 1;
  }
  if (mass_ratio) by_force(axial, *mass_ratio, lower, out.variance);
  for (std::size_t i = 0; i < n; ++i) {
    const double relative = lower[i] - axial.upper_m_s2[i] - axial.rotation_m_s2[i];
    out.relative_m_s2.push_back(axial.usable[i] ? relative : 0.0);
    if (!axial.usable[i]) out.variance[i] = unusable_m_s2 * unusable_m_s2;
  }
  return out;
}

}  // namespace clickwise::motion
