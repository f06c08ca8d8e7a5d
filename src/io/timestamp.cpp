#include "clickwise/io/timestamp.hpp"

#include <algorithm>
#include <limits>
#include <optional>
#include <utility>

namespace clickwise::io {

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

// Takes pieces off the front of a text; anything unexpected makes ok() false for good.
class Taker {
public:
  explicit Taker(std::string_view text) : text_(text) {}

  bool ok() const { return ok_; }
  bool done() const { return text_.empty(); }
  char peek() const { return text_.empty() ? '\0' : text_.front(); }

  bool take(char wanted) {
    if (peek() != wanted || done()) return false;
    text_.remove_prefix(1);
    return true;
  }
  void require(char wanted) { ok_ = take(wanted) && ok_; }

  // A number of `least` to `most` digits.
  int digits(std::size_t least, std::size_t most) {
    int value = 0;
    std::size_t count = 0;
    for (; count < most && peek() >= '0' && peek() <= '9'; ++count) {
      value = 10 * value + (peek() - '0');
      text_.remove_prefix(1);
    }
    ok_ = ok_ && count >= least;
    return value;
  }

  // Digits behind a decimal mark as a part of one, with the first 15 of them.
  double fraction() {
    double numerator = 0.0;
    double denominator = 1.0;
    std::size_t count = 0;
    for (; peek() >= '0' && peek() <= '9'; ++count) {
      if (count < 15) {
        numerator = 10.0 * numerator + (peek() - '0');
        denominator *= 10.0;
      }
      text_.remove_prefix(1);
    }
    ok_ = ok_ && count > 0;
    return numerator / denominator;
  }

private:
  std::string_view text_;
  bool ok_ = true;
};

// Days from 1970-01-01 in the Gregorian calendar: years begin in March so that the leap day is
// their last; 400 years have 146097 days, and 719468 days lead from 0000-03-01 to the epoch.
long days_from_epoch(int year, int month, int day) {
  const int shifted = month > 2 ? year : year - 1;
  const long era = shifted / 400;
  const long year_of_era = shifted - era * 400;
  const long day_of_year = (153L * (month > 2 ? month - 3 : month + 9) + 2) / 5 + day - 1;
  return era * 146097 + year_of_era * 365 + year_of_era / 4 - year_of_era / 100 + day_of_year -
         719468;
}

bool exists(int year, int month, int day) {
  constexpr int lengths[] = {31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
  if (month < 1 || month > 12 || day < 1) return false;
  const bool leap = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
  return day <= lengths[month - 1] + (month == 2 && leap ? 1 : 0);
}

// Whole seconds and the part of one, kept apart so that no digit is lost.
struct Moment {
  double whole_s = 0.0;
  double part_s = 0.0;
};

std::optional<Moment> take_time_of_day(Taker& taker, bool seconds_required) {
  const int hour = taker.digits(1, 2);
  taker.require(':');
  const int minute = taker.digits(2, 2);
  int second = 0;
  double part = 0.0;
  if (seconds_required || taker.peek() == ':') {
    taker.require(':');
    second = taker.digits(2, 2);
    if (taker.take('.') || taker.take(',')) part = taker.fraction();
  }
  if (!taker.ok() || hour > 24 || minute > 59 || second > 60) return std::nullopt;
  second = std::min(second, 59);
  return Moment{3600.0 * hour + 60.0 * minute + second, part};
}

std::optional<double> take_zone(Taker& taker) {
  if (taker.done() || taker.take('Z') || taker.take('z')) return 0.0;
  const double sign = taker.peek() == '-' ? -1.0 : 1.0;
  if (!taker.take('+')) taker.require('-');
  const int hours = taker.digits(2, 2);
  taker.take(':');
  const int minutes = taker.done() ? 0 : taker.digits(2, 2);
  if (!taker.ok() || hours > 23 || minutes > 59) return std::nullopt;
  return sign * (3600.0 * hours + 60.0 * minutes);
}

std::optional<long> take_date(Taker& taker) {
  const int first = taker.digits(1, 4);
  const char mark = taker.peek();
  if (mark != '-' && mark != '/' && mark != '.') return std::nullopt;
  taker.require(mark);
  int month = taker.digits(1, 2);
  taker.require(mark);
  const bool year_first = first > 31;
  int day = year_first ? taker.digits(1, 2) : first;
  const int year = year_first ? first : taker.digits(4, 4);
  if (!year_first && month > 12) std::swap(day, month);
  if (!taker.ok() || !exists(year, month, day)) return std::nullopt;
  return days_from_epoch(year, month, day);
}

std::string_view trimmed(std::string_view text) {
  const auto first = text.find_first_not_of(" \t\r");
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(" \t\r") - first + 1);
}

}  // namespace

bool is_time_of_day(std::string_view text) {
  Taker taker(trimmed(text));
  return take_time_of_day(taker, true).has_value() && taker.done();
}

double parse_timestamp(std::string_view text, double epoch_s) {
  const std::string_view stamp = trimmed(text);
  if (stamp.size() < 5 || stamp.front() < '0' || stamp.front() > '9') return not_a_number;
  if (stamp[1] == ':' || stamp[2] == ':') {
    Taker taker(stamp);
    const auto time = take_time_of_day(taker, true);
    return time && taker.done() ? time->whole_s + time->part_s : not_a_number;
  }
  Taker taker(stamp);
  const auto days = take_date(taker);
  if (!days || !(taker.take('T') || taker.take('t') || taker.take(' '))) return not_a_number;
  while (taker.take(' ')) {
  }
  const auto time = take_time_of_day(taker, false);
  while (taker.take(' ')) {
  }
  const auto zone = take_zone(taker);
  if (!time || !zone || !taker.ok() || !taker.done()) return not_a_number;
  return (86400.0 * static_cast<double>(*days) + time->whole_s - *zone - epoch_s) + time->part_s;
}

}  // namespace clickwise::io
