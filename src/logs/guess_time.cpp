#include "guess_time.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <string>
#include <string_view>

namespace clickwise::logs {

namespace {

constexpr double least_rising_share = 0.95;

struct Unit {
  std::string_view name;
  double seconds;
};

constexpr std::array<Unit, 3> units{{{"s", 1.0}, {"ms", 1e-3}, {"us", 1e-6}}};

// The words of a name, in lower case: "Time (ms)" is time, ms; "tUs" stays one word.
std::vector<std::string> words_of(std::string_view name) {
  std::vector<std::string> words(1);
  for (const char c : name) {
    const char lower = static_cast<char>(c >= 'A' && c <= 'Z' ? c + 32 : c);
    const bool letter = (lower >= 'a' && lower <= 'z') || (lower & 0x80);
    if (letter)
      words.back() += lower;
    else if (!words.back().empty())
      words.emplace_back();
  }
  if (words.back().empty()) words.pop_back();
  return words;
}

template <std::size_t n>
bool any_of_words(const std::vector<std::string>& words,
                  const std::array<std::string_view, n>& wanted) {
  return std::any_of(words.begin(), words.end(), [&](const std::string& word) {
    return std::find(wanted.begin(), wanted.end(), word) != wanted.end();
  });
}

bool says_time(const std::vector<std::string>& words) {
  constexpr std::array<std::string_view, 14> names{
      "time", "t",     "timestamp", "timestamps", "clock", "millis",  "micros",
      "zeit", "temps", "tiempo",    "tempo",      "stamp", "elapsed", "seconds"};
  return any_of_words(words, names);
}

bool says_counter(const std::vector<std::string>& words) {
  constexpr std::array<std::string_view, 9> names{"row",   "index",  "count",  "counter", "sample",
                                                  "frame", "packet", "number", "id"};
  return any_of_words(words, names);
}

const Unit* unit_in(const std::vector<std::string>& words) {
  if (any_of_words(words, std::array<std::string_view, 6>{"us", "µs", "micros", "usec",
                                                          "microseconds", "μs"}))
    return &units[2];
  if (any_of_words(words, std::array<std::string_view, 4>{"ms", "millis", "msec", "milliseconds"}))
    return &units[1];
  if (any_of_words(words, std::array<std::string_view, 4>{"s", "sec", "secs", "seconds"}))
    return &units[0];
  return nullptr;
}

bool says_nanoseconds(const std::vector<std::string>& words) {
  return any_of_words(words, std::array<std::string_view, 3>{"ns", "nanos", "nanoseconds"});
}

// 2 for rates at which suspension is logged, 1 for slow ones such as a satellite receiver's.
int plausibility(double rate_hz) {
  if (rate_hz >= 50.0 && rate_hz <= 5000.0) return 2;
  return rate_hz >= 0.5 && rate_hz < 50.0 ? 1 : 0;
}

const Unit& likeliest_unit(double step) {
  const Unit* best = &units[0];
  for (const Unit& unit : units)
    if (plausibility(1.0 / (step * unit.seconds)) > plausibility(1.0 / (step * best->seconds)))
      best = &unit;
  return *best;
}

struct Candidate {
  TimeGuess guess;
  int score = 0;
};

std::optional<Candidate> candidate(const ColumnFacts& column, const Advance& advance) {
  const bool stamps = column.kind == ColumnKind::timestamp;
  if (!stamps && column.kind != ColumnKind::number) return std::nullopt;
  if (advance.rising_share < least_rising_share || !(advance.typical_step > 0.0))
    return std::nullopt;
  const std::vector<std::string> words = words_of(column.name);
  const Unit* const named = unit_in(words);
  if (says_nanoseconds(words)) return std::nullopt;
  const Unit& unit = named != nullptr ? *named : likeliest_unit(advance.typical_step);
  Candidate found;
  found.guess = {static_cast<std::size_t>(column.number - 1), std::string(unit.name), unit.seconds,
                 says_time(words), named != nullptr};
  if (stamps) {
    found.guess.unit = "date";
    found.guess.seconds_per_unit = 1.0;
    found.guess.unit_by_name = false;
  }
  const int plausible = plausibility(1.0 / (advance.typical_step * found.guess.seconds_per_unit));
  if (!found.guess.by_name && (says_counter(words) || plausible == 0)) return std::nullopt;
  found.score = 8 * found.guess.by_name + 2 * plausible + (stamps ? 1 : 0) + (named ? 1 : 0);
  return found;
}

}  // namespace

std::optional<TimeGuess> guess_time(const std::vector<ColumnFacts>& columns,
                                    const std::vector<Advance>& advances) {
  std::optional<Candidate> best;
  for (std::size_t i = 0; i < columns.size(); ++i) {
    const auto found = candidate(columns[i], advances[i]);
    if (found && (!best || found->score > best->score)) best = found;
  }
  return best ? std::optional(best->guess) : std::nullopt;
}

}  // namespace clickwise::logs
