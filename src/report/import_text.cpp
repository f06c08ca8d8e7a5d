#include "clickwise/report/import_text.hpp"

#include <fmt/format.h>

#include "words.hpp"

namespace clickwise::report {

std::string import_text(const workflow::Import& result) {
  std::string ends;
  for (const bike::EndName end : result.ends)
    ends += (ends.empty() ? "" : " and ") + part_words(end);
  std::string text =
      fmt::format("{}: {} of {} from {} at {:.6g} Hz, {} riding, {:.1f} MB\n", result.archive_path,
                  duration_words(result.log.duration_s), ends, result.log.name, result.log.rate_hz,
                  duration_words(result.log.riding_s), static_cast<double>(result.bytes) / 1e6);
  const std::vector<std::string> faults = fault_words(result.log.faults);
  for (const std::string& fault : faults) text += "  " + fault + "\n";
  for (const std::string& note : result.notes) text += "  " + note + "\n";
  return text;
}

}  // namespace clickwise::report
