#include "clickwise/report/simulate_text.hpp"

#include <fmt/format.h>

#include "words.hpp"

namespace clickwise::report {

std::string simulate_text(const workflow::SimulateResult& result) {
  std::string text = fmt::format("{}: {} of invented riding, written to\n",
                                 result.scene_name.empty() ? "An unnamed scene" : result.scene_name,
                                 duration_words(result.seconds));
  for (const std::string& file : result.files) text += "  " + file + "\n";
  return text;
}

}  // namespace clickwise::report
