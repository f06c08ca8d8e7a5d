// Text of unknown encoding made fit for JSON, TOML and screens.
#pragma once

#include <string>
#include <string_view>

namespace clickwise::core {

// The text itself where it is UTF-8 (RFC 3629 section 4); otherwise each of its bytes taken for a
// character of ISO 8859-1, which older loggers write. O(length).
std::string as_utf8(std::string_view text);

}  // namespace clickwise::core
