// TOML 1.0 read strictly: every value knows where it stands, getters check type and range, and
// keys that nobody asked for are refused.
//
//   const TomlTable root = read_toml("larch.toml");
//   if (const auto front = root.table("front"))
//     stroke_mm = front->need_number("stroke_mm", {.least = 10, .most = 500, .example = 170});
//   root.finish();
//
// Every failure is a core::InputError with file, line and column, worded
//   front.stroke_mm = "abc": must be a number in mm; write for example stroke_mm = 170.0
#pragma once

#include <cstddef>
#include <limits>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "clickwise/core/errors.hpp"

namespace clickwise::io {

struct TomlNode;
class TomlTable;

enum class TomlKind { text, integer, number, boolean, date_time, array, table };

// What a number must be. `example` appears in the remedy.
struct Limits {
  double least = -std::numeric_limits<double>::infinity();
  double most = std::numeric_limits<double>::infinity();
  bool ends_excluded = false;  // strictly between least and most
  double example = 1.0;
};

// One value. Cheap to copy; keeps its document alive. Not for sharing between threads.
class TomlValue {
public:
  explicit TomlValue(std::shared_ptr<const TomlNode> node) : node_(std::move(node)) {}

  TomlKind kind() const;
  const std::string& name() const;  // from the root: "front.sensor.calibration[2]"; "" at the root
  std::string key() const;          // the last part of the name
  core::Place place() const;

  // Finite, and within the limits. Whole numbers are accepted where a double holds them exactly.
  double number(const Limits& limits = {}) const;
  // Written without a point; within [least, most].
  long long integer(long long least = std::numeric_limits<long long>::min(),
                    long long most = std::numeric_limits<long long>::max()) const;
  bool boolean() const;
  std::string text() const;  // not empty
  std::string choice(const std::vector<std::string_view>& words) const;
  std::vector<TomlValue> items() const;  // of an array
  std::vector<double> numbers() const;   // an array of finite numbers
  // An array of arrays of `width` finite numbers, at least `least_rows` of them.
  std::vector<std::vector<double>> rows(std::size_t width, std::size_t least_rows = 1) const;
  TomlTable table() const;

  // Throws core::InputError here: "<name> = <value>: <wrong>; <remedy>".
  [[noreturn]] void refuse(const std::string& wrong, const std::string& remedy) const;

private:
  std::shared_ptr<const TomlNode> node_;
};

// One table. Getters without `need_` give nothing when the key is absent; `need_` ones refuse.
// Asking for a key, present or not, makes it a known one.
class TomlTable {
public:
  explicit TomlTable(std::shared_ptr<const TomlNode> node);

  const std::string& name() const;  // "front.sensor"; "" at the root
  core::Place place() const;        // of its header or brace; the file as a whole at the root

  bool has(std::string_view key) const;
  std::optional<TomlValue> find(std::string_view key) const;
  // `example` is the line to add, as in "add for example <example>".
  TomlValue need(std::string_view key, const std::string& example) const;
  // Every key with its value, in the order of the file; all of them become known.
  std::vector<std::pair<std::string, TomlValue>> entries() const;

  std::optional<double> number(std::string_view key, const Limits& limits = {}) const;
  double need_number(std::string_view key, const Limits& limits = {}) const;
  double number_or(std::string_view key, double otherwise, const Limits& limits = {}) const;
  std::optional<long long> integer(std::string_view key,
                                   long long least = std::numeric_limits<long long>::min(),
                                   long long most = std::numeric_limits<long long>::max()) const;
  std::optional<bool> boolean(std::string_view key) const;
  std::optional<std::string> text(std::string_view key) const;
  std::string need_text(std::string_view key, const std::string& example_text) const;
  std::optional<std::string> choice(std::string_view key,
                                    const std::vector<std::string_view>& words) const;
  std::string need_choice(std::string_view key, const std::vector<std::string_view>& words) const;
  std::optional<TomlTable> table(std::string_view key) const;
  TomlTable need_table(std::string_view key, const std::string& example) const;
  // `[[key]]`, or an array of inline tables; empty when absent.
  std::vector<TomlTable> tables(std::string_view key) const;

  // Refuses the first key, here or in any table opened through this one, that nobody has asked
  // for, with the nearest known key of its table. Call when all has been read.
  void finish() const;

  // Throws core::InputError at the table's head: "<name>: <wrong>; <remedy>".
  [[noreturn]] void refuse(const std::string& wrong, const std::string& remedy) const;

private:
  std::shared_ptr<const TomlNode> node_;
};

// The root table of a text; `path` only names it in messages. A byte-order mark is accepted.
TomlTable parse_toml(std::string_view text, const std::string& path);

// The text of a file of at most 16 MiB, for parse_toml. Refuses folders and unreadable files.
std::string read_toml_text(const std::string& path);

TomlTable read_toml(const std::string& path);

// The candidate nearest to `word` by edits (a letter put in, left out, changed, or two swapped; a
// forgotten unit, "stroke" for "stroke_mm", counts as one); empty when none is within a third of
// the word's length (at least 2).
std::string nearest_word(std::string_view word, const std::vector<std::string>& candidates);

}  // namespace clickwise::io
