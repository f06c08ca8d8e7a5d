// Walks over the delimiters, line ends and quotes of a text, 64 bytes at a time.
#pragma once

#include <bit>
#include <cstddef>
#include <cstdint>
#include <cstring>

#if defined(__SSE2__)
#include <emmintrin.h>
#endif

namespace clickwise::io {

class SeparatorScanner {
public:
  SeparatorScanner(const char* text_end, char delimiter, char second_delimiter)
      : end_(text_end), delimiter_(delimiter), second_(second_delimiter) {}

  void start_at(const char* at) {
    block_ = at;
    mask_ = load(at);
  }

  // The next separator, or the end of the text.
  const char* next() {
    while (mask_ == 0) {
      if (end_ - block_ <= 64) return end_;
      block_ += 64;
      mask_ = load(block_);
    }
    const char* const at = block_ + std::countr_zero(mask_);
    mask_ &= mask_ - 1;
    return at;
  }

private:
  std::uint64_t load(const char* at) const {
    if (end_ - at >= 64) return full_mask(at);
    char padded[64] = {};
    if (at < end_) std::memcpy(padded, at, static_cast<std::size_t>(end_ - at));
    return full_mask(padded);
  }

  std::uint64_t full_mask(const char* at) const {
    std::uint64_t mask = 0;
#if defined(__SSE2__)
    const __m128i delimiter = _mm_set1_epi8(delimiter_);
    const __m128i second = _mm_set1_epi8(second_);
    const __m128i line_end = _mm_set1_epi8('\n');
    const __m128i quote = _mm_set1_epi8('"');
    for (int part = 0; part < 4; ++part) {
      const __m128i bytes = _mm_loadu_si128(reinterpret_cast<const __m128i*>(at) + part);
      const __m128i hit = _mm_or_si128(
          _mm_or_si128(_mm_cmpeq_epi8(bytes, delimiter), _mm_cmpeq_epi8(bytes, second)),
          _mm_or_si128(_mm_cmpeq_epi8(bytes, line_end), _mm_cmpeq_epi8(bytes, quote)));
      mask |= static_cast<std::uint64_t>(static_cast<std::uint32_t>(_mm_movemask_epi8(hit)))
              << (16 * part);
    }
#else
    for (int i = 0; i < 64; ++i) {
      const char c = at[i];
      const bool hit = c == delimiter_ || c == second_ || c == '\n' || c == '"';
      mask |= static_cast<std::uint64_t>(hit) << i;
    }
#endif
    return mask;
  }

  const char* end_;
  const char* block_ = nullptr;
  std::uint64_t mask_ = 0;
  char delimiter_;
  char second_;
};

}  // namespace clickwise::io
