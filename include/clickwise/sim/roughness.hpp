// Random ground of a roughness class: ISO 8608:2016, "Mechanical vibration - Road surface
// profiles - Reporting of measured data".
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

namespace clickwise::sim {

// n0, the spatial frequency at which the classes are stated, in cycles per m.
inline constexpr double reference_frequency_per_m = 0.1;

// Limits and geometric mean of G_d(n0) in m^3. Class A has no lower limit (0), H no upper
// (infinity).
struct RoughnessClass {
  double lower_m3 = 0.0;
  double mean_m3 = 0.0;
  double upper_m3 = 0.0;
};

// 'A' (smooth) to 'H'. Throws std::invalid_argument for another letter.
RoughnessClass roughness_class(char letter);

// The wavelengths that a synthesised ground holds: spatial frequencies n1 to n2, cycles per m.
struct SpatialBand {
  double low_per_m = 0.05;
  double high_per_m = 10.0;
  std::size_t components = 512;
};

// Heights (m) at i * spacing_m, i < count, with the displacement spectrum
//
//   G(n) = G_d(n0) (n0 / n)^2   for n1 <= n <= n2, else 0     (m^3, one-sided)              (1)
//
// as a sum of cosines of seeded random phases. The band is cut into cells [n_a, n_b] in geometric
// progression, each carried by one cosine at sqrt(n_a n_b) with the cell's whole power, so the
// closed forms
//
//   variance of height   G_d n0^2 (1/n1 - 1/n2)                                             (2)
//   variance of slope    4 pi^2 G_d n0^2 (n2 - n1)                                          (3)
//
// hold exactly over a long ground. Cost count * components. `stream` gives independent grounds of
// one seed.
std::vector<double> random_profile(double roughness_m3, const SpatialBand& band, double spacing_m,
                                   std::size_t count, std::uint64_t seed, std::uint64_t stream);

}  // namespace clickwise::sim
