#include "clickwise/io/delimited.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <random>
#include <string>

using namespace clickwise::io;

namespace {

using Cells = std::vector<std::string>;

TextLayout layout_of(std::size_t columns, char delimiter = ',', char point = '.') {
  TextLayout layout;
  layout.delimiter = delimiter;
  layout.point = point;
  layout.columns = columns;
  return layout;
}

std::string text_of(double value) {
  return std::isnan(value) ? "-" : std::to_string(static_cast<long long>(value));
}

// All columns as text, a row in brackets, '-' for NaN: "[1 2][3 -]".
std::string table(const std::string& text, const TextLayout& layout, std::size_t chunk = 0) {
  std::vector<WantedColumn> wanted;
  for (std::size_t k = 0; k < layout.columns; ++k) wanted.push_back({k});
  const Columns read = read_columns(text, layout, wanted, {chunk});
  std::string result;
  for (std::size_t i = 0; i < read.rows; ++i) {
    std::vector<std::string> row;
    for (const Column& column : read.columns) row.push_back(text_of(column.values[i]));
    result += fmt::format("[{}]", fmt::join(row, " "));
  }
  return result;
}

}  // namespace

TEST_CASE("the examples of RFC 4180 section 2 items 6 and 7 (check value 10a)", "[delimited]") {
  const std::string quotes = "\"aaa\",\"b\"\"bb\",\"ccc\"";
  CHECK(read_record(quotes, 0, ',').cells == Cells{"aaa", "b\"bb", "ccc"});

  const std::string lines = "\"aaa\",\"b\r\nbb\",\"ccc\"\r\nzzz,yyy,xxx";
  const Record first = read_record(lines, 0, ',');
  CHECK(first.cells == Cells{"aaa", "b\r\nbb", "ccc"});
  const Record second = read_record(lines, first.end, ',');
  CHECK(second.cells == Cells{"zzz", "yyy", "xxx"});
  CHECK(second.end == lines.size());
}

TEST_CASE("RFC 4180 section 2 items 2 to 4: last line end, blanks kept (check value 10b)",
          "[delimited]") {
  CHECK(read_record("aaa,bbb,ccc\r\n", 0, ',').cells == read_record("aaa,bbb,ccc", 0, ',').cells);
  CHECK(read_record(" aaa , b b ,", 0, ',').cells == Cells{" aaa ", " b b ", ""});
  CHECK(table("1,2\r\n3,4\r\n", layout_of(2)) == "[1 2][3 4]");
  CHECK(table("1,2\r\n3,4", layout_of(2)) == "[1 2][3 4]");
}

TEST_CASE("what is written quoted reads back the same", "[delimited]") {
  for (const std::string cell : {"plain", "a,b", "a\"b", "a\nb", "", " a ", "\"", "a;b"}) {
    const std::string line = quoted_cell(cell) + "," + quoted_cell("next");
    CHECK(read_record(line, 0, ',').cells == Cells{cell, "next"});
  }
  CHECK(quoted_cell("plain") == "plain");
  CHECK(quoted_cell("a,b") == "\"a,b\"");
}

TEST_CASE("broken quoting costs one line only", "[delimited]") {
  const std::string text = "\"1,2\n3,4\n5,6\n";
  CHECK(read_record(text, 0, ',').cells == Cells{"\"1", "2"});
  CHECK(table(text, layout_of(2)) == "[- 2][3 4][5 6]");
  CHECK(table("1,\"2\"x\n3,4\n", layout_of(2)) == "[1 -][3 4]");
  CHECK(table("1,2\"\n3,4\n", layout_of(2)) == "[1 -][3 4]");
}

TEST_CASE("delimiters of every kind", "[delimited]") {
  CHECK(table("1;2\n3;4\n", layout_of(2, ';')) == "[1 2][3 4]");
  CHECK(table("1\t2\n\t4\n", layout_of(2, '\t')) == "[1 2][- 4]");
  CHECK(table("  1   2\n3 \t 4  \r\n", layout_of(2, ' ')) == "[1 2][3 4]");
  CHECK(table("1,50;2\n", layout_of(2, ';', ',')) == "[1 2]");
  CHECK(table("\"1\",\" 2\"\n \"3\" ,4\n", layout_of(2)) == "[1 2][3 4]");
  CHECK(table("\"1\" \"2\"\n3 4\n", layout_of(2, ' ')) == "[1 2][3 4]");
}

TEST_CASE("comments and blank lines are no rows; wrong rows are counted where they stand",
          "[delimited]") {
  const std::string text = "1,2\n# note, with comma\n\n3,4\n5\n6,7,8\n\r\n9,10\n";
  const Columns read = read_columns(text, layout_of(2), {{1}});
  CHECK(read.columns[0].values == std::vector<double>{2, 4, 10});
  REQUIRE(read.malformed.size() == 1);
  CHECK(read.malformed[0].row == 2);
  CHECK(read.malformed[0].count == 2);
  CHECK(read.malformed_rows() == 2);
  CHECK(read.whole_rows == 3);

  ColumnsOptions keep;
  keep.keep_malformed_rows = true;
  const Columns kept = read_columns(text, layout_of(2), {{1}}, keep);
  CHECK(kept.rows == 5);
  CHECK(kept.whole_rows == 3);
  CHECK(std::isnan(kept.columns[0].values[2]));
  CHECK(std::isnan(kept.columns[0].values[3]));
}

TEST_CASE("a blank line is a lost cell in a text of one column, but not at its end",
          "[delimited]") {
  const Columns read = read_columns("1\n\n3\n\n\n", layout_of(1), {{0}});
  CHECK(read.rows == 2);
  CHECK(read.malformed_rows() == 1);
}

TEST_CASE("empty and unreadable cells are told apart", "[delimited]") {
  const Columns read = read_columns("1,\n2, \n3,abc\n4,nan\n5,6\n", layout_of(2), {{1}});
  const Column& column = read.columns[0];
  CHECK(column.empty_cells == 2);
  CHECK(column.unreadable_cells == 2);
  CHECK(column.unreadable_example == "abc");
  CHECK(column.values.back() == 6.0);
}

TEST_CASE("columns may be asked for in any order and twice", "[delimited]") {
  const Columns read = read_columns("1,2,3\n4,5,6\n", layout_of(3), {{2}, {0}, {2}});
  CHECK(read.columns[0].values == std::vector<double>{3, 6});
  CHECK(read.columns[1].values == std::vector<double>{1, 4});
  CHECK(read.columns[2].values == read.columns[0].values);
}

TEST_CASE("the header and its units once more mark a reboot", "[delimited]") {
  TextLayout layout = layout_of(2);
  const std::string text = "t,a\ns,mm\n1,2\n3,4\nt,a\ns,mm\n5,6\n";
  layout.header = std::string_view(text).substr(0, 3);
  layout.units = std::string_view(text).substr(4, 4);
  layout.data_begin = 9;
  for (std::size_t chunk = 1; chunk <= text.size(); ++chunk) {
    const Columns read = read_columns(text, layout, {{0}}, {chunk});
    CHECK(read.columns[0].values == std::vector<double>{1, 3, 5});
    CHECK(read.header_repeats == std::vector<std::size_t>{2});
    CHECK(read.malformed_rows() == 0);
  }
}

TEST_CASE("the last line without a line end is read if it looks whole", "[delimited]") {
  const std::string rows = "1,10.25\n2,10.50\n3,11.00\n";
  const auto last = [&](const std::string& line) {
    const Columns read = read_columns(rows + line, layout_of(2), {{1}});
    CHECK(read.malformed_rows() == 0);
    return read.truncated ? 0.0 : read.columns[0].values.back();
  };
  CHECK(last("4,11.25") == 11.25);
  CHECK(last("4,11.2") == 0.0);   // fewer decimals
  CHECK(last("4,11") == 0.0);     // shorter
  CHECK(last("4,") == 0.0);       // empty
  CHECK(last("4") == 0.0);        // no such cell
  CHECK(last("4,91.25") == 0.0);  // a jump such as cut digits make
  CHECK(last("# end") == 11.0);   // a comment is no row
}

TEST_CASE("the result does not depend on where chunks end", "[delimited]") {
  std::mt19937 random(7);
  std::string text;
  for (int i = 0; i < 60; ++i) {
    const auto kind = random() % 12;
    if (kind == 0)
      text += "# comment\n";
    else if (kind == 1)
      text += "\n";
    else if (kind == 2)
      text += "7,8\r\n";
    else if (kind == 3)
      text += fmt::format("\"{}\",,x\n", i);
    else
      text += fmt::format("{},{},-3.5\r\n", i, random() % 1000);
  }
  const auto reading = [&](const std::string& whole, std::size_t chunk) {
    const Columns read = read_columns(whole, layout_of(3), {{0}, {1}, {2}}, {chunk});
    std::string result = table(whole, layout_of(3), chunk);
    for (const MalformedRows& run : read.malformed)
      result += fmt::format(" {}x{}", run.row, run.count);
    for (const Column& column : read.columns)
      result += fmt::format(" {}/{} {}", column.empty_cells, column.unreadable_cells,
                            column.unreadable_example);
    return result;
  };
  SECTION("with lines only") {
    const std::string whole = reading(text, text.size());
    for (std::size_t chunk = 1; chunk < text.size(); ++chunk)
      REQUIRE(reading(text, chunk) == whole);
  }
  SECTION("with a line end in quotes") {
    text.insert(text.find('\n', text.size() / 2) + 1, "1,\"2\n\",3\n");
    const std::string whole = reading(text, text.size());
    for (std::size_t chunk = 1; chunk < text.size(); ++chunk)
      REQUIRE(reading(text, chunk) == whole);
  }
}

TEST_CASE("random bytes never crash, and every line is accounted for", "[delimited]") {
  std::mt19937 random(99);
  constexpr std::string_view alphabet("0123456789.,;\"\n\r\t -#eE+\xFFx\0", 26);
  for (int round = 0; round < 3000; ++round) {
    std::string text;
    const auto size = random() % 200;
    for (std::size_t i = 0; i < size; ++i) text += alphabet[random() % alphabet.size()];
    const std::size_t columns = 1 + random() % 4;
    const char delimiter = ",; \t"[random() % 4];
    const TextLayout layout = layout_of(columns, delimiter);
    const std::string whole = table(text, layout, text.size() + 1);
    CHECK(table(text, layout, 1 + random() % 20) == whole);
    const Columns read = read_columns(text, layout, {{0}});
    const auto lines = static_cast<std::size_t>(std::count(text.begin(), text.end(), '\n')) + 1;
    CHECK(read.rows + read.malformed_rows() <= lines);
  }
}

TEST_CASE("stray quotes in every line take linear time", "[delimited]") {
  std::string text;
  for (int i = 0; i < 200000; ++i) text += "\"\"\"\"\"\"\"\n";
  const Columns read = read_columns(text, layout_of(2), {{0}});
  CHECK(read.rows + read.malformed_rows() <= 200000);
}

TEST_CASE("a line of many megabytes is one malformed row", "[delimited]") {
  std::string text = "1,2\n3,4\n";
  text += std::string(8U << 20U, ',') + "\n5,6\n";
  const Columns read = read_columns(text, layout_of(2), {{0}}, {1024});
  CHECK(read.columns[0].values == std::vector<double>{1, 3, 5});
  CHECK(read.malformed_rows() == 1);
}
