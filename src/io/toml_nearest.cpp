#include <algorithm>

#include "clickwise/io/toml.hpp"

namespace clickwise::io {

namespace {

// Optimal string alignment: insertions, deletions, changes and swaps of neighbours each cost 1.
std::size_t edits(std::string_view a, std::string_view b) {
  std::vector<std::vector<std::size_t>> d(a.size() + 1, std::vector<std::size_t>(b.size() + 1));
  for (std::size_t i = 0; i <= a.size(); ++i) d[i][0] = i;
  for (std::size_t j = 0; j <= b.size(); ++j) d[0][j] = j;
  for (std::size_t i = 1; i <= a.size(); ++i) {
    for (std::size_t j = 1; j <= b.size(); ++j) {
      const std::size_t change = d[i - 1][j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1);
      d[i][j] = std::min({d[i - 1][j] + 1, d[i][j - 1] + 1, change});
      const bool swapped = i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1];
      if (swapped) d[i][j] = std::min(d[i][j], d[i - 2][j - 2] + 1);
    }
  }
  return d[a.size()][b.size()];
}

// "stroke" for "stroke_mm"
bool forgot_unit(std::string_view word, std::string_view candidate) {
  return !word.empty() && candidate.size() > word.size() && candidate.starts_with(word) &&
         candidate[word.size()] == '_';
}

}  // namespace

std::string nearest_word(std::string_view word, const std::vector<std::string>& candidates) {
  constexpr std::size_t longest_compared = 64;
  if (word.size() > longest_compared) return {};
  std::string best;
  std::size_t fewest = std::max<std::size_t>(2, word.size() / 3) + 1;
  for (const std::string& candidate : candidates) {
    const std::size_t distance = forgot_unit(word, candidate) ? 1 : edits(word, candidate);
    if (distance >= fewest || distance >= candidate.size()) continue;
    fewest = distance;
    best = candidate;
  }
  return best;
}

}  // namespace clickwise::io
