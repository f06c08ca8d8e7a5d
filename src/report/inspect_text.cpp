#include "clickwise/report/inspect_text.hpp"

#include <fmt/format.h>

#include "clickwise/core/units.hpp"
#include "words.hpp"

namespace clickwise::report {

namespace {

using core::to_mm;

std::string format_words(const logs::TextFormat& format) {
  std::string words =
      fmt::format("text, columns parted by {}", logs::delimiter_name(format.layout.delimiter));
  words += format.has_header ? ", with a header" : ", without a header";
  if (format.header_in_comment) words += " in a comment line";
  return words;
}

// `guessed`: no bike file said which column is the time.
std::string clock_words(const logs::LogFacts& facts, bool guessed) {
  if (facts.rate_hz <= 0.0)
    return "no time column found: the bike file must give [log] rate_hz, or name the column";
  std::string words =
      fmt::format("{} at {:.6g} Hz", duration_words(facts.duration_s), facts.rate_hz);
  if (facts.time) {
    const logs::ColumnFacts& column = facts.columns[facts.time->column];
    words += fmt::format(
        ", time from {} in {}",
        column.name.empty() ? fmt::format("column {}", column.number) : "\"" + column.name + "\"",
        facts.time->unit);
    if (guessed && (!facts.time->by_name || !facts.time->unit_by_name))
      words += " (a guess: check it)";
  }
  if (facts.longest_gap_s > 0.0)
    words += fmt::format(", longest gap {:.3g} s", facts.longest_gap_s);
  if (facts.wraps > 0) words += fmt::format(", {} wraps of the clock undone", facts.wraps);
  return words;
}

std::string column_line(const logs::ColumnFacts& column) {
  std::string line = fmt::format("  {:>3}  {:<24} {:<10}", column.number,
                                 column.name.empty() ? "-" : column.name, to_string(column.kind));
  if (column.kind == logs::ColumnKind::number || column.kind == logs::ColumnKind::constant) {
    line += fmt::format(" {:>12.6g} {:>12.6g}", column.least, column.most);
    line += column.resolution > 0.0 ? fmt::format(" {:>10.4g}", column.resolution)
                                    : fmt::format(" {:>10}", "-");
  } else {
    line += fmt::format(" {:>36}", column.example.substr(0, 36));
  }
  line += fmt::format(" {:>9}", column.missing);
  return column.units.empty() ? line : line + "  " + column.units;
}

std::string end_line(const workflow::InspectedEnd& end) {
  return fmt::format(
      "  {} from {}: {:.1f} to {:.1f} of {:.0f} mm, {} usable, reading noise {:.3f} mm",
      part_words(end.name), end.channel, to_mm(end.least_m), to_mm(end.most_m), to_mm(end.stroke_m),
      duration_words(end.usable_s), to_mm(end.reading_noise_m));
}

void add_list(std::string& text, const std::string& heading,
              const std::vector<std::string>& lines) {
  if (lines.empty()) return;
  text += "\n" + heading + "\n";
  for (const std::string& line : lines) text += "  " + line + "\n";
}

}  // namespace

std::string inspect_text(const workflow::Inspection& inspection) {
  const logs::LogFacts& facts = inspection.facts;
  std::string text = fmt::format(
      "{}: {} rows, {} columns; {}\n{}\n\n", facts.name, facts.rows, facts.columns.size(),
      facts.binary_format.empty() ? format_words(facts.format) : facts.binary_format,
      clock_words(facts, !inspection.starter_bike.empty()));
  text += fmt::format("  {:>3}  {:<24} {:<10} {:>12} {:>12} {:>10} {:>9}\n", "", "column", "kind",
                      "least", "most", "step", "missing");
  for (const logs::ColumnFacts& column : facts.columns) text += column_line(column) + "\n";
  add_list(text, "The file holds", facts.contents);
  if (!inspection.ends.empty()) text += "\nTravel\n";
  for (const workflow::InspectedEnd& end : inspection.ends) text += end_line(end) + "\n";
  const std::vector<std::string> faults = fault_words(inspection.faults);
  if (faults.empty()) text += "\nNo faults found.\n";
  add_list(text, "Faults", faults);
  add_list(text, "Notes", inspection.notes);
  if (!inspection.starter_bike.empty())
    text += "\nA bike file to start from: fill in each \"?\" and save it as bike.toml\n\n" +
            inspection.starter_bike;
  return text;
}

}  // namespace clickwise::report
