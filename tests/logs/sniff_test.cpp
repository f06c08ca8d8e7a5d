#include "clickwise/logs/sniff.hpp"

#include <catch2/catch.hpp>
#include <random>
#include <string>

#include "clickwise/core/errors.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;
using logs::sniff_text_log;
using Names = std::vector<std::string>;

namespace {

std::string utf16(const std::string& text, bool with_mark) {
  std::string wide = with_mark ? "\xFF\xFE" : "";
  for (const char c : text) {
    wide += c;
    wide += '\0';
  }
  return wide;
}

}  // namespace

TEST_CASE("every delimiter is told apart, with and without a header", "[sniff]") {
  struct Case {
    std::string text;
    char delimiter;
    char point;
    Names names;
    long long data_line;
  };
  const Case cases[] = {
      {"t,a,b\n0,1,2\n1,3,4\n", ',', '.', {"t", "a", "b"}, 2},
      {"0,1,2\n1,3,4\n", ',', '.', {"", "", ""}, 1},
      {"t;a\n0,5;1,25\n1,5;2,5\n", ';', ',', {"t", "a"}, 2},
      {"t;a\n0.5;1.25\n1.5;2.5\n", ';', '.', {"t", "a"}, 2},
      {"t\ta\n0,5\t1\n1,5\t2\n", '\t', ',', {"t", "a"}, 2},
      {"t\ta\n0.5\t\n1.5\t2\n", '\t', '.', {"t", "a"}, 2},
      {"time  fork\n 0.5    1\n 1.5   22\n", ' ', '.', {"time", "fork"}, 2},
      {"0,5 1,5\n1,5 2,5\n", ' ', ',', {"", ""}, 1},
      {"t, a, b\n0.1, 2, 3\n0.2, 3, 4\n", ',', '.', {"t", "a", "b"}, 2},
      {"fork\n12,5\n13,5\n", ';', ',', {"fork"}, 2},
      {"fork\n125\n135\n", ',', '.', {"fork"}, 2},
      {"125\n135\n", ',', '.', {""}, 1},
  };
  for (const Case& one : cases) {
    INFO(one.text);
    const logs::TextFormat format = sniff_text_log(one.text, "larch.csv");
    if (one.names.size() > 1) CHECK(format.layout.delimiter == one.delimiter);
    CHECK(format.layout.point == one.point);
    CHECK(format.names == one.names);
    CHECK(format.data_line == one.data_line);
    CHECK(format.has_header == !one.names[0].empty());
  }
}

TEST_CASE("quoted headers, a byte order mark and CRLF", "[sniff]") {
  const auto format =
      sniff_text_log("\xEF\xBB\xBF\"time, s\",\" fork \"\"adc\"\"\"\r\n0,1\r\n1,2\r\n", "x.csv");
  CHECK(format.names == Names{"time, s", "fork \"adc\""});
  CHECK(format.byte_order_mark);
  CHECK(format.crlf);
  CHECK(format.data_line == 2);
  CHECK(sniff_text_log("\"time\ns\",a\n0,1\n", "x.csv").names == Names{"time\ns", "a"});
  CHECK(sniff_text_log("\"time\ns\",a\n0,1\n", "x.csv").data_line == 3);
}

TEST_CASE("comments in front of the header, and a header in the last comment", "[sniff]") {
  const auto plain = sniff_text_log("# logger 3\n# rate, 1000, Hz\n\nt,a\n0,1\n1,2\n", "x.csv");
  CHECK(plain.names == Names{"t", "a"});
  CHECK(plain.data_line == 5);
  CHECK(plain.comment_lines == 2);
  CHECK_FALSE(plain.header_in_comment);

  const auto comment = sniff_text_log("# logger 3\n# t,a\n0,1\n1,2\n", "x.csv");
  CHECK(comment.names == Names{"t", "a"});
  CHECK(comment.header_in_comment);
  CHECK_FALSE(sniff_text_log("# one, two, three\n0,1\n1,2\n", "x.csv").has_header);
  CHECK_FALSE(sniff_text_log("# 0,1\n0,1\n1,2\n", "x.csv").has_header);
  CHECK_FALSE(sniff_text_log("# a sentence on one column\n5\n6\n", "x.csv").has_header);
}

TEST_CASE("preambles, units and delimiters at line ends", "[sniff]") {
  const auto format =
      sniff_text_log("Larch on Quarry Nine\nDate: 2 May\nt,a\n[s],[mm]\n0,1\n1,2\n", "x.csv");
  CHECK(format.names == Names{"t", "a"});
  CHECK(format.units_row == "[s],[mm]");
  CHECK(format.preamble_lines == 2);
  CHECK(format.data_line == 5);
  CHECK(sniff_text_log("t,a\n0,1,\n1,2,\n", "x.csv").names == Names{"t", "a", ""});
  CHECK(sniff_text_log("t,a,\n0,1\n1,2\n", "x.csv").names == Names{"t", "a"});
}

TEST_CASE("columns of words and of dates do not hide the header", "[sniff]") {
  const auto format =
      sniff_text_log("when,state,fork\n2023-10-27 08:33:34,S,\n2023-10-27 08:33:35,M,5\n", "x.csv");
  CHECK(format.names == Names{"when", "state", "fork"});
  CHECK(format.data_line == 2);
}

TEST_CASE("a first row damaged in one cell is not taken for a header", "[sniff]") {
  CHECK_FALSE(sniff_text_log("ERR,5,6\n1,5,6\n2,5,6\n3,5,6\n", "x.csv").has_header);
}

TEST_CASE("what is no log is refused in words", "[sniff]") {
  const auto refused = [](const std::string& text) -> std::string {
    try {
      sniff_text_log(text, "larch.csv");
    } catch (const core::InputError& error) {
      return error.what();
    }
    return "read";
  };
  CHECK(refused("") == "larch.csv: the file is empty; check the logger's card");
  CHECK_THAT(refused(" \n\n"), Contains("empty"));
  CHECK_THAT(refused(utf16("t,a\n0,1\n1,2\n", true)),
             Contains("larch.csv:1: ") && Contains("UTF-16"));
  CHECK_THAT(refused(utf16("t,a\n0,1\n1,2\n", false)), Contains("UTF-16"));
  CHECK_THAT(refused("t,a\r0,1\r1,2\r"), Contains("carriage returns"));
  CHECK_THAT(refused("t,a,b\n"), Contains("larch.csv:1: ") && Contains("no row of readings"));
  CHECK_THAT(refused("# only\n# comments\n"), Contains("no row of readings"));
  CHECK_THAT(refused("<html>\n<body>\n<p>hello</p>\n</html>\n"), Contains("no row of numbers"));
  CHECK_THAT(refused("t,a\n" + std::string(3U << 20U, '1')),
             Contains("larch.csv:2: ") && Contains("does not end within 1 MiB"));
  std::mt19937 random(5);
  std::string noise;
  for (int i = 0; i < 10000; ++i) noise += static_cast<char>(random());
  CHECK_THAT(refused(noise), Contains("binary") && Contains("[log] packed = {"));
  CHECK_THAT(refused("\x93NUMPY\x01\n1,2\n3,4\n"), Contains("NumPy") && Contains("HDF5 group"));
  CHECK_THAT(refused(std::string("PK\x03\x04") + "zip\n"), Contains("zip"));
}

TEST_CASE("columns are found by name and by number", "[sniff]") {
  const auto format = sniff_text_log("time_us,fork_adc,x,x,Shock (mm)\n0,1,2,3,4\n", "larch.csv");
  CHECK(logs::find_column(format, {"fork_adc", 0}, "larch.csv") == 1);
  CHECK(logs::find_column(format, {"", 5}, "larch.csv") == 4);
  CHECK(logs::column_label(format, 1) == "fork_adc");
  const auto refused = [&](const bike::ColumnRef& column) -> std::string {
    try {
      logs::find_column(format, column, "larch.csv");
    } catch (const core::InputError& error) {
      return error.what();
    }
    return "found";
  };
  CHECK(
      refused({"frok_adc", 0}) ==
      "larch.csv:1: the bike file names the column \"frok_adc\", which the log does not have; did "
      "you mean \"fork_adc\"? the log has \"time_us\", \"fork_adc\", \"x\", \"x\", \"Shock (mm)\"");
  CHECK_THAT(refused({"shock_mm", 0}), Contains("did you mean \"Shock (mm)\""));
  CHECK_THAT(refused({"tyre", 0}), !Contains("did you mean") && Contains("the log has"));
  CHECK_THAT(refused({"x", 0}),
             Contains("more than one column \"x\"") && Contains("column = 3 or 4"));
  CHECK_THAT(refused({"", 6}), Contains("5 columns") && Contains("from 1 to 5"));
  CHECK_THAT(refused({"", -1}), Contains("from 1 to 5"));
  const auto bare = sniff_text_log("0,1\n1,2\n", "larch.csv");
  CHECK(logs::column_label(bare, 1) == "2");
  CHECK_THROWS_WITH(logs::find_column(bare, {"t", 0}, "larch.csv"), Contains("no header"));
}
