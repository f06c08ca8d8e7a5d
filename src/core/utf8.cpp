#include "clickwise/core/utf8.hpp"

#include <cstddef>

namespace clickwise::core {

namespace {

using Byte = unsigned char;

bool is_tail(Byte byte) {
  return byte >= 0x80 && byte <= 0xBF;
}

// Bounds of the second byte: no overlong forms, no surrogates, nothing above U+10FFFF.
bool is_second(Byte first, Byte second) {
  if (first == 0xE0) return second >= 0xA0 && second <= 0xBF;
  if (first == 0xED) return second >= 0x80 && second <= 0x9F;
  if (first == 0xF0) return second >= 0x90 && second <= 0xBF;
  if (first == 0xF4) return second >= 0x80 && second <= 0x8F;
  return is_tail(second);
}

// Bytes of the character that `first` begins; 0 where none may begin so.
std::size_t length_of(Byte first) {
  if (first < 0x80) return 1;
  if (first >= 0xC2 && first <= 0xDF) return 2;
  if (first >= 0xE0 && first <= 0xEF) return 3;
  if (first >= 0xF0 && first <= 0xF4) return 4;
  return 0;
}

bool is_utf8(std::string_view text) {
  for (std::size_t i = 0; i < text.size();) {
    const auto at = [&](std::size_t k) { return static_cast<Byte>(text[i + k]); };
    const std::size_t length = length_of(at(0));
    if (length == 0 || i + length > text.size()) return false;
    if (length > 1 && !is_second(at(0), at(1))) return false;
    for (std::size_t k = 2; k < length; ++k)
      if (!is_tail(at(k))) return false;
    i += length;
  }
  return true;
}

}  // namespace

std::string as_utf8(std::string_view text) {
  if (is_utf8(text)) return std::string(text);
  std::string utf8;
  for (const char letter : text) {
    const auto byte = static_cast<Byte>(letter);
    if (byte < 0x80) {
      utf8 += letter;
    } else {
      utf8 += static_cast<char>(0xC0 | (byte >> 6));
      utf8 += static_cast<char>(0x80 | (byte & 0x3F));
    }
  }
  return utf8;
}

}  // namespace clickwise::core
