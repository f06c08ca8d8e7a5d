// Plain decimals ("-12.345", up to 16 characters behind the sign) without a loop over the digits.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <cstring>

namespace clickwise::io {

static_assert(std::endian::native == std::endian::little, "digits are gathered little-endian");

__extension__ typedef unsigned __int128 Bytes16;

inline constexpr std::array<double, 17> exact_powers_of_ten{
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16};

inline constexpr std::uint64_t eight_zeros = 0x3030303030303030U;

inline bool all_digits(std::uint64_t text) {
  return ((text & 0xF0F0F0F0F0F0F0F0U) |
          (((text + 0x0606060606060606U) & 0xF0F0F0F0F0F0F0F0U) >> 4U)) == 0x3333333333333333U;
}

// Eight digits, the first in the lowest byte: neighbours are joined to pairs, pairs to fours,
// fours to the whole, each by one multiplication.
inline std::uint64_t eight_digits(std::uint64_t text) {
  text -= eight_zeros;
  text = text * 10U + (text >> 8U);
  return ((text & 0x000000FF000000FFU) * 0x000F424000000064U +
          ((text >> 16U) & 0x000000FF000000FFU) * 0x0000271000000001U) >>
         32U;
}

// Position of the first byte equal to `wanted`, or 8.
inline unsigned find_byte(std::uint64_t text, char wanted) {
  const std::uint64_t x = text ^ (0x0101010101010101U * static_cast<unsigned char>(wanted));
  const std::uint64_t zero = (x - 0x0101010101010101U) & ~x & 0x8080808080808080U;
  return zero == 0 ? 8U : static_cast<unsigned>(std::countr_zero(zero)) / 8U;
}

// Puts the number [first, last) into `value` and returns true, or returns false where the text is
// not of the plain form. At least 17 bytes from `first` on must be readable. A mantissa below 2^53
// and a power of ten up to 10^22 are exact doubles, so their quotient is rounded once, correctly
// (W. D. Clinger, How to read floating point numbers accurately, PLDI 1990).
inline bool fast_decimal(const char* first, const char* last, char point, double& value) {
  const bool negative = *first == '-';
  first += negative || *first == '+';
  const std::ptrdiff_t length = last - first;
  if (length <= 0 || length > 16) return false;
  unsigned digits = static_cast<unsigned>(length);
  unsigned decimals = 0;
  std::uint64_t mantissa = 0;
  if (digits <= 8) {
    std::uint64_t text = 0;
    std::memcpy(&text, first, 8);
    const unsigned mark = find_byte(text, point);
    if (mark < digits) {
      const std::uint64_t whole = (std::uint64_t{1} << (8U * mark)) - 1U;
      text = (text & whole) | ((text >> 8U) & ~whole);
      decimals = --digits - mark;
      if (digits == 0) return false;
    }
    const unsigned shift = 64U - 8U * digits;
    text <<= shift;
    text |= eight_zeros & ((std::uint64_t{1} << shift) - 1U);
    if (!all_digits(text)) return false;
    mantissa = eight_digits(text);
  } else {
    // Two loads of 8: one of 16 goes through a vector register and stalls on its way out.
    std::uint64_t low = 0;
    std::uint64_t high = 0;
    std::memcpy(&low, first, 8);
    std::memcpy(&high, first + 8, 8);
    Bytes16 text = (Bytes16{high} << 64U) | low;
    unsigned mark = find_byte(low, point);
    if (mark == 8) mark += find_byte(high, point);
    if (mark < digits) {
      const Bytes16 whole = (Bytes16{1} << (8U * mark)) - 1U;
      text = (text & whole) | ((text >> 8U) & ~whole);
      decimals = --digits - mark;
    }
    const unsigned shift = 128U - 8U * digits;
    text <<= shift;
    constexpr Bytes16 zeros = (Bytes16{eight_zeros} << 64U) | eight_zeros;
    text |= zeros & ((Bytes16{1} << shift) - 1U);
    const std::uint64_t head = static_cast<std::uint64_t>(text);
    const std::uint64_t tail = static_cast<std::uint64_t>(text >> 64U);
    if (!all_digits(head) || !all_digits(tail)) return false;
    mantissa = eight_digits(head) * 100000000U + eight_digits(tail);
    if (mantissa > (std::uint64_t{1} << 53U)) return false;
  }
  const double magnitude =
      static_cast<double>(static_cast<std::int64_t>(mantissa)) / exact_powers_of_ten[decimals];
  value = negative ? -magnitude : magnitude;
  return true;
}

}  // namespace clickwise::io
