// The bank's members side by side in one vector, which every loop keeps in registers. Private to
// signal.
#pragma once

#include <cmath>
#include <cstddef>

#include "spline_bank.hpp"

namespace clickwise::signal {

inline constexpr std::size_t lanes = bank_size;
static_assert(lanes == 8);

using Vector = float __attribute__((vector_size(lanes * sizeof(float))));

// Aligned by hand: without the instructions for a Vector the compiler aligns it less than the code
// with them needs.
struct alignas(sizeof(Vector)) Row {
  Vector v;
};

[[gnu::always_inline]] inline Row operator+(const Row& a, const Row& b) {
  return {a.v + b.v};
}
[[gnu::always_inline]] inline Row operator-(const Row& a, const Row& b) {
  return {a.v - b.v};
}
[[gnu::always_inline]] inline Row operator*(const Row& a, const Row& b) {
  return {a.v * b.v};
}
[[gnu::always_inline]] inline Row operator/(const Row& a, const Row& b) {
  return {a.v / b.v};
}

// The same in every lane.
[[gnu::always_inline]] inline Row all(float value) {
  return {Vector{} + value};
}

template <typename Lanes>
Row row_of(const Lanes& lanes_of) {
  Row row{};
  for (std::size_t k = 0; k < lanes; ++k)
    row.v[k] = static_cast<float>(lanes_of[static_cast<Eigen::Index>(k)]);
  return row;
}

// Each lane less the next slower one; the last lane itself.
[[gnu::always_inline]] inline Row steps(const Row& row) {
  return {row.v - __builtin_shufflevector(row.v, Vector{}, 1, 2, 3, 4, 5, 6, 7, 8)};
}

[[gnu::always_inline]] inline float sum(const Row& row) {
  const Vector four = row.v + __builtin_shufflevector(row.v, row.v, 4, 5, 6, 7, 0, 1, 2, 3);
  const Vector two = four + __builtin_shufflevector(four, four, 2, 3, 0, 1, 6, 7, 4, 5);
  return two[0] + two[1];
}

[[gnu::always_inline]] inline Row larger(const Row& a, const Row& b) {
  return {a.v > b.v ? a.v : b.v};
}

[[gnu::always_inline]] inline float largest(const Row& row) {
  const Row four = larger(row, {__builtin_shufflevector(row.v, row.v, 4, 5, 6, 7, 0, 1, 2, 3)});
  const Row two = larger(four, {__builtin_shufflevector(four.v, four.v, 2, 3, 0, 1, 6, 7, 4, 5)});
  return two.v[0] > two.v[1] ? two.v[0] : two.v[1];
}

[[gnu::always_inline]] inline Row root(const Row& a) {
  Row out;
  for (std::size_t i = 0; i < lanes; ++i) out.v[i] = std::sqrt(a.v[i]);
  return out;
}

}  // namespace clickwise::signal
