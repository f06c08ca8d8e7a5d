// Whether a file is text that the log reader can read.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace clickwise::logs {

// Lines longer than this at the start of a file mean that it is no log.
inline constexpr std::size_t longest_first_line = std::size_t{1} << 20U;

// The bytes of a byte order mark to skip: 3 or 0. Throws core::InputError for what is no UTF-8 or
// single-byte text in lines.
std::size_t check_encoding(std::string_view text, const std::string& path);

}  // namespace clickwise::logs
