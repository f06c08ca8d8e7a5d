// The bank's members side by side, in vectors that every loop keeps in registers. Private to
// signal.
#pragma once

#include <cmath>
#include <cstddef>

#include "spline_bank.hpp"

namespace clickwise::signal {

inline constexpr std::size_t quad_lanes = 4;
inline constexpr std::size_t quads = bank_size / quad_lanes;
static_assert(quads * quad_lanes == bank_size);

using Quad = double __attribute__((vector_size(quad_lanes * sizeof(double))));
using FloatQuad = float __attribute__((vector_size(quad_lanes * sizeof(float))));

// Aligned by hand: without the instructions for a Quad the compiler aligns it less than the code
// with them needs.
template <typename Vector>
struct alignas(sizeof(Vector)) RowOf {
  Vector q[quads];
  Vector& operator[](std::size_t i) { return q[i]; }
  const Vector& operator[](std::size_t i) const { return q[i]; }
};
using Row = RowOf<Quad>;
using FloatRow = RowOf<FloatQuad>;

template <typename Vector, typename Lanes>
void copy(const Lanes& lanes, RowOf<Vector>& row) {
  for (std::size_t k = 0; k < bank_size; ++k)
    row[k / quad_lanes][k % quad_lanes] = lanes[static_cast<Eigen::Index>(k)];
}

// Each lane less the next slower one; the last lane itself.
template <typename Vector>
[[gnu::always_inline]] inline RowOf<Vector> steps(const RowOf<Vector>& row) {
  RowOf<Vector> out;
  for (std::size_t q = 0; q < quads; ++q) {
    const Vector next = q + 1 < quads ? row[q + 1] : Vector{};
    out[q] = row[q] - __builtin_shufflevector(row[q], next, 1, 2, 3, 4);
  }
  return out;
}

template <typename Vector>
[[gnu::always_inline]] inline auto sum(const RowOf<Vector>& row) {
  const Vector all = row[0] + row[1] + row[2];
  return (all[0] + all[1]) + (all[2] + all[3]);
}

[[gnu::always_inline]] inline FloatQuad larger(FloatQuad a, FloatQuad b) {
  return a > b ? a : b;
}

[[gnu::always_inline]] inline FloatQuad root(FloatQuad a) {
  FloatQuad out;
  for (std::size_t i = 0; i < quad_lanes; ++i) out[i] = std::sqrt(a[i]);
  return out;
}

}  // namespace clickwise::signal
