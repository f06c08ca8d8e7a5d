#include "text_encoding.hpp"

#include <algorithm>

#include "clickwise/core/errors.hpp"

namespace clickwise::logs {

namespace {

constexpr std::size_t bytes_looked_at = 4096;

constexpr const char* packed_remedy =
    "if it is a log of packed frames, tell the frame in the bike file, as in [log] packed = { "
    "endian "
    "= \"little\", header_bytes = 0, frame = [[\"t_us\", \"u32\"], [\"fork_adc\", \"u16\"]] }, and "
    "give it with --bike";

struct ByteCounts {
  std::size_t even_zeros = 0;
  std::size_t odd_zeros = 0;
  std::size_t controls = 0;  // none of tab, line feed, carriage return, form feed; zeros included
};

ByteCounts count_bytes(std::string_view head) {
  ByteCounts counts;
  for (std::size_t i = 0; i < head.size(); ++i) {
    const auto byte = static_cast<unsigned char>(head[i]);
    if (byte == 0) ++(i % 2 == 0 ? counts.even_zeros : counts.odd_zeros);
    const bool usual = byte >= 0x20 || byte == '\t' || byte == '\n' || byte == '\r' || byte == '\f';
    if (!usual || byte == 0x7F) ++counts.controls;
  }
  return counts;
}

bool is_utf16(std::string_view head, const ByteCounts& counts) {
  if (head.starts_with("\xFF\xFE") || head.starts_with("\xFE\xFF")) return true;
  const std::size_t half = head.size() / 2;
  const std::size_t most = std::max(counts.even_zeros, counts.odd_zeros);
  const std::size_t least = std::min(counts.even_zeros, counts.odd_zeros);
  return half >= 4 && most * 10 > half * 9 && least * 10 < half;
}

}  // namespace

std::size_t check_encoding(std::string_view text, const std::string& path) {
  if (text.find_first_not_of(" \t\r\n", 0) == std::string_view::npos)
    throw core::InputError({path}, "the file is empty", "check the logger's card");
  if (text.starts_with("\x93NUMPY") || text.starts_with("PK\x03\x04"))
    throw core::InputError({path}, "this is a NumPy array or a zip file, which are not read",
                           "save its columns as text, or as the data sets of an HDF5 group");
  const std::string_view head = text.substr(0, bytes_looked_at);
  const ByteCounts counts = count_bytes(head);
  if (is_utf16(head, counts))
    throw core::InputError({path, 1}, "the text is written in UTF-16", "save the log as UTF-8");
  if (counts.controls * 50 > head.size())
    throw core::InputError({path, 1}, "this is no text but binary data", packed_remedy);
  const std::string_view first = text.substr(0, longest_first_line);
  if (first.find('\n') == std::string_view::npos) {
    const auto carriage = first.find('\r');
    if (carriage != std::string_view::npos && carriage + 1 < first.size())
      throw core::InputError({path, 1}, "lines end in bare carriage returns",
                             "save the log with LF or CRLF line ends");
  }
  return text.starts_with("\xEF\xBB\xBF") ? 3 : 0;
}

}  // namespace clickwise::logs
