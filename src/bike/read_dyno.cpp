#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "bike_readers.hpp"
#include "clickwise/core/units.hpp"
#include "clickwise/io/delimited.hpp"
#include "clickwise/io/number.hpp"

namespace clickwise::bike {

namespace {

constexpr std::string_view velocity_column = "velocity_mm_s";
constexpr std::string_view force_column = "force_n";
constexpr double most_speed_mm_s = 2e4;
constexpr double most_force_n = 1e5;
constexpr double most_clicks = 200.0;
constexpr std::size_t most_bytes = std::size_t{4} << 20U;
constexpr std::size_t most_points = 20000;
constexpr std::string_view byte_order_mark = "\xEF\xBB\xBF";

std::string trimmed(std::string_view text) {
  constexpr std::string_view blanks = " \t\r\n";
  const auto begin = text.find_first_not_of(blanks);
  if (begin == std::string_view::npos) return {};
  return std::string(text.substr(begin, text.find_last_not_of(blanks) - begin + 1));
}

// The cell as a message shows it.
std::string shown(std::string_view cell) {
  constexpr std::size_t most = 40;
  std::string text = trimmed(cell.substr(0, most));
  for (char& c : text)
    if (static_cast<unsigned char>(c) < ' ') c = '?';
  return fmt::format("\"{}{}\"", text, cell.size() > most ? "..." : "");
}

// Records one after the other, with the line at which each begins.
class Rows {
public:
  Rows(std::string_view text, std::string path) : text_(text), path_(std::move(path)) {
    if (text_.starts_with(byte_order_mark)) at_ = byte_order_mark.size();
  }

  // False at the end. Blank lines and comments are skipped.
  bool next() {
    while (at_ < text_.size()) {
      const io::Record record = io::read_record(text_, at_, ',');
      const std::string_view written = text_.substr(at_, record.end - at_);
      line_ = next_line_;
      next_line_ += static_cast<int>(std::count(written.begin(), written.end(), '\n'));
      at_ = record.end;
      const std::string first = trimmed(written);
      if (first.empty() || first.front() == '#') continue;
      cells_ = record.cells;
      return true;
    }
    return false;
  }

  const std::vector<std::string>& cells() const { return cells_; }
  int line() const { return line_; }
  core::Place place() const { return {path_, line_}; }

  [[noreturn]] void refuse(const std::string& wrong, const std::string& remedy) const {
    throw core::InputError(place(), wrong, remedy);
  }

private:
  std::string_view text_;
  std::string path_;
  std::size_t at_ = 0;
  int line_ = 0;
  int next_line_ = 1;
  std::vector<std::string> cells_;
};

constexpr std::size_t absent = std::numeric_limits<std::size_t>::max();

struct TableColumns {
  std::size_t velocity = absent;
  std::size_t force = absent;
  std::array<std::size_t, 4> setting{absent, absent, absent, absent};
  std::size_t count = 0;
};

std::vector<std::string> known_columns() {
  std::vector<std::string> names{std::string(velocity_column), std::string(force_column)};
  for (const Adjuster adjuster : all_adjusters) names.emplace_back(to_string(adjuster));
  return names;
}

[[noreturn]] void refuse_column(const Rows& rows, const std::string& name) {
  const auto known = known_columns();
  const std::string nearest = io::nearest_word(name, known);
  rows.refuse(fmt::format("the column {} is none that a dyno table has", shown(name)),
              nearest.empty() ? fmt::format("keep {}", fmt::join(known, ", "))
                              : fmt::format("did you mean {}?", nearest));
}

TableColumns read_header(const Rows& rows) {
  TableColumns columns;
  columns.count = rows.cells().size();
  for (std::size_t i = 0; i < columns.count; ++i) {
    const std::string name = trimmed(rows.cells()[i]);
    std::size_t* place = nullptr;
    if (name == velocity_column) place = &columns.velocity;
    if (name == force_column) place = &columns.force;
    if (const auto adjuster = adjuster_from(name))
      place = &columns.setting[static_cast<std::size_t>(*adjuster)];
    if (!place) refuse_column(rows, name);
    if (*place != absent)
      rows.refuse(fmt::format("the column {} is there twice", name), "keep the right one");
    *place = i;
  }
  if (columns.velocity == absent || columns.force == absent)
    rows.refuse("a dyno table needs the columns velocity_mm_s and force_n",
                "start the file with velocity_mm_s,force_n,low_speed_compression and so on, with "
                "commas between cells and points in decimals");
  return columns;
}

double read_cell(const Rows& rows, std::size_t column, std::string_view name, double most) {
  const std::string& cell = rows.cells()[column];
  const double value = io::parse_number(cell);
  if (std::isnan(value))
    rows.refuse(fmt::format("{} = {} is not a number", name, shown(cell)),
                "write a decimal number with a point, or take the row out");
  if (std::abs(value) > most)
    rows.refuse(
        fmt::format("{} = {} is larger than any damper reaches ({:g})", name, shown(cell), most),
        "check the unit of the column");
  return value;
}

// NaN where the table has no such column, or leaves open what the row's direction does not need.
double read_setting(const Rows& rows, std::size_t column, Adjuster adjuster, bool needed) {
  if (column == absent) return std::numeric_limits<double>::quiet_NaN();
  const std::string& cell = rows.cells()[column];
  if (!needed && trimmed(cell).empty()) return std::numeric_limits<double>::quiet_NaN();
  const double value = io::parse_number(cell);
  if (!(value >= 0.0 && value <= most_clicks && value == std::floor(value)))
    rows.refuse(
        fmt::format("{} = {} is no number of clicks", to_string(adjuster), shown(cell)),
        fmt::format("write the clicks out from closed, a whole number from 0 to {}", most_clicks));
  return value;
}

DynoPoint read_point(const Rows& rows, const TableColumns& columns) {
  if (rows.cells().size() != columns.count)
    rows.refuse(
        fmt::format("the row has {} cells and the header {}", rows.cells().size(), columns.count),
        "give each row one cell a column; decimals take a point");
  DynoPoint point;
  point.velocity_m_s =
      core::from_mm(read_cell(rows, columns.velocity, velocity_column, most_speed_mm_s));
  point.force_n = read_cell(rows, columns.force, force_column, most_force_n);
  point.line = rows.line();
  for (const Adjuster adjuster : all_adjusters) {
    const auto which = static_cast<std::size_t>(adjuster);
    const bool needed = acts_in_compression(adjuster) == (point.velocity_m_s > 0.0);
    point.setting[which] =
        read_setting(rows, columns.setting[which], adjuster, needed && point.velocity_m_s != 0.0);
  }
  return point;
}

// A few points of the wrong sign are friction or noise; most of them are another sign convention.
void check_signs(const std::vector<DynoPoint>& points, const std::string& path) {
  for (const double sign : {1.0, -1.0}) {
    std::size_t count = 0;
    std::size_t against = 0;
    int line = 0;
    for (const DynoPoint& point : points) {
      if (!(point.velocity_m_s * sign > 0.0)) continue;
      ++count;
      if (!(point.force_n * sign < 0.0)) continue;
      ++against;
      if (line == 0) line = point.line;
    }
    if (2 * against > count)
      throw core::InputError(
          {path, line},
          fmt::format("in {} of {} {} rows the force has the other sign than the velocity", against,
                      count, sign > 0.0 ? "compression" : "rebound"),
          "write compression with velocity and force positive, rebound with both negative, and "
          "take "
          "the gas spring's force off");
  }
}

// The adjuster's column where its own direction uses it, without repeats, ascending.
std::vector<int> settings_measured(const DynoDamper& damper, Adjuster adjuster) {
  std::vector<int> all;
  for (const DynoPoint& point : damper.points) {
    const double setting = point.setting[static_cast<std::size_t>(adjuster)];
    if (acts_in_compression(adjuster) == (point.velocity_m_s > 0.0) && !std::isnan(setting))
      all.push_back(static_cast<int>(setting));
  }
  std::sort(all.begin(), all.end());
  all.erase(std::unique(all.begin(), all.end()), all.end());
  return all;
}

void check_against_counted(const DynoDamper& damper, Adjuster adjuster, const Clicks& clicks,
                           const std::string& path) {
  for (const DynoPoint& point : damper.points) {
    const double setting = point.setting[static_cast<std::size_t>(adjuster)];
    if (setting > clicks.clicks)
      throw core::InputError({path, point.line},
                             fmt::format("{} = {:.0f}, but the bike file counts {} clicks",
                                         to_string(adjuster), setting, clicks.clicks),
                             "correct the row, or the clicks in the bike file");
  }
}

// The range from closed to the widest setting measured; the present setting is anybody's guess, and
// the one measured nearest the middle is taken.
void count_by_columns(DynoDamper& damper, Adjuster adjuster) {
  const auto settings = settings_measured(damper, adjuster);
  if (settings.empty() || settings.back() == 0) return;
  const int clicks = settings.back();
  const int setting = *std::min_element(settings.begin(), settings.end(), [&](int a, int b) {
    return std::abs(2 * a - clicks) < std::abs(2 * b - clicks);
  });
  damper.counted(adjuster) = Clicks{0.0, 0.0, clicks, setting};
  damper.notes.push_back(fmt::format(
      "{}: the bike file does not count its clicks; taken from the table: {} clicks, now at {}. If "
      "that is wrong, add {} = {{ {} = {{ clicks = {}, setting = {} }} }} to the damper",
      words(adjuster), clicks, setting, acts_in_compression(adjuster) ? "compression" : "rebound",
      is_bleed(adjuster) ? "bleed" : "valve", clicks, setting));
}

void read_rows(Rows& rows, DynoDamper& damper) {
  if (!rows.next()) rows.refuse("the dyno table is empty", "give velocity_mm_s,force_n and rows");
  const TableColumns columns = read_header(rows);
  std::size_t resting = 0;
  while (rows.next()) {
    const DynoPoint point = read_point(rows, columns);
    if (point.velocity_m_s == 0.0)
      ++resting;
    else
      damper.points.push_back(point);
    if (damper.points.size() > most_points)
      rows.refuse(fmt::format("more than {} points", most_points),
                  "average the dyno's trace over bands of speed first");
  }
  if (damper.points.empty())
    rows.refuse("the dyno table has no point that moves", "give rows of velocity and force");
  if (resting > 0)
    damper.notes.push_back(
        fmt::format("{} rows at rest are left out: a damper at rest shows friction only", resting));
}

}  // namespace

void read_dyno_table(const std::string& path, DynoDamper& damper) {
  if (damper.text.size() > most_bytes)
    throw core::InputError({path}, "the file is too large for a dyno table",
                           "average the dyno's trace over bands of speed first");
  Rows rows(damper.text, path);
  read_rows(rows, damper);
  check_signs(damper.points, path);
  for (const Adjuster adjuster : all_adjusters) {
    if (const auto& clicks = damper.counted(adjuster))
      check_against_counted(damper, adjuster, *clicks, path);
    else
      count_by_columns(damper, adjuster);
  }
}

}  // namespace clickwise::bike
