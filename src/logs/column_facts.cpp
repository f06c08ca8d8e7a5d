#include "column_facts.hpp"

#include <algorithm>
#include <cmath>

#include "clock_steps.hpp"
#include "decimal_grid.hpp"

namespace clickwise::logs {

namespace {

std::vector<double> readable(const std::vector<double>& values) {
  std::vector<double> numbers;
  std::copy_if(values.begin(), values.end(), std::back_inserter(numbers),
               [](double value) { return !std::isnan(value); });
  return numbers;
}

ColumnKind kind_of_column(const io::Column& column, io::CellKind cells, const ColumnFacts& facts) {
  if (facts.count == 0) return column.unreadable_cells > 0 ? ColumnKind::text : ColumnKind::empty;
  if (cells == io::CellKind::timestamp) return ColumnKind::timestamp;
  if (column.unreadable_cells > facts.count) return ColumnKind::text;
  return facts.least == facts.most ? ColumnKind::constant : ColumnKind::number;
}

void describe_spread(ColumnFacts& facts, const std::vector<double>& numbers) {
  const auto count = static_cast<double>(numbers.size());
  double sum = 0.0;
  for (const double number : numbers) sum += number;
  facts.mean = sum / count;
  double squares = 0.0;
  for (const double number : numbers) squares += (number - facts.mean) * (number - facts.mean);
  facts.deviation = std::sqrt(squares / count);
}

}  // namespace

std::string_view to_string(ColumnKind kind) {
  switch (kind) {
    case ColumnKind::number:
      return "number";
    case ColumnKind::constant:
      return "constant";
    case ColumnKind::timestamp:
      return "timestamp";
    case ColumnKind::text:
      return "text";
    default:
      return "empty";
  }
}

ColumnFacts describe(const io::Column& column, io::CellKind cells, Advance& advance) {
  ColumnFacts facts;
  const std::vector<double> numbers = readable(column.values);
  facts.count = numbers.size();
  facts.missing = column.values.size() - numbers.size();
  if (!numbers.empty()) {
    const auto [least, most] = std::minmax_element(numbers.begin(), numbers.end());
    facts.least = *least;
    facts.most = *most;
    facts.resolution = decimal_grid(numbers);
    describe_spread(facts, numbers);
  }
  facts.kind = kind_of_column(column, cells, facts);
  if (numbers.size() < 2) return facts;
  std::size_t rising = 0;
  for (std::size_t i = 1; i < numbers.size(); ++i) rising += numbers[i] >= numbers[i - 1];
  advance.rising_share = static_cast<double>(rising) / static_cast<double>(numbers.size() - 1);
  if (advance.rising_share > 0.9) advance.typical_step = rough_interval(numbers);
  return facts;
}

void describe_clock(LogFacts& facts, const Clock& clock) {
  facts.duration_s = clock.t_s.empty() ? 0.0 : clock.t_s.back();
  facts.rate_hz = 1.0 / clock.interval_s;
  facts.clock_resolution_s = clock.resolution_s;
  facts.longest_gap_s = clock.longest_gap_s;
  facts.wraps = clock.wraps;
  facts.repeated_stamps = clock.repeated_stamps;
  facts.faults.merge(clock.faults);
  facts.notes.insert(facts.notes.end(), clock.notes.begin(), clock.notes.end());
}

}  // namespace clickwise::logs
