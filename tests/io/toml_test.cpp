#include "clickwise/io/toml.hpp"

#include <catch2/catch.hpp>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <random>

#include "support/refusal.hpp"

using Catch::Matchers::Contains;
using Catch::Matchers::StartsWith;
using clickwise::io::Limits;
using clickwise::io::nearest_word;
using clickwise::io::parse_toml;
using clickwise::io::read_toml;
using clickwise::io::TomlTable;
using clickwise::test::refusal;

namespace {
TomlTable parse(const std::string& text) {
  return parse_toml(text, "larch.toml");
}
constexpr Limits stroke_limits{.least = 10.0, .most = 500.0, .example = 170.0};
}  // namespace

TEST_CASE("values of every kind are read with their names and places", "[io]") {
  const TomlTable root = parse(
      "name = \"Larch\"\n"
      "[front]\n"
      "stroke_mm = 170\n"
      "on = true\n"
      "points = [[0, 90.5], [40, 300]]\n"
      "clicks = 16\n"
      "[[run]]\n"
      "log = \"a.csv\"\n"
      "[[run]]\n"
      "log = \"b.csv\"\n");
  CHECK(root.text("name") == "Larch");
  const TomlTable front = root.need_table("front", "[front]");
  CHECK(front.number("stroke_mm", stroke_limits) == 170.0);
  CHECK(front.boolean("on") == true);
  CHECK(front.integer("clicks", 1, 99) == 16);
  const auto rows = front.need("points", "points = [[0, 90]]").rows(2, 2);
  REQUIRE(rows.size() == 2);
  CHECK(rows[0] == std::vector{0.0, 90.5});
  const auto runs = root.tables("run");
  REQUIRE(runs.size() == 2);
  CHECK(runs[0].need_text("log", "x.csv") == "a.csv");
  CHECK(runs[1].need_text("log", "x.csv") == "b.csv");
  CHECK(front.find("stroke_mm")->name() == "front.stroke_mm");
  CHECK(to_string(front.find("stroke_mm")->place()) == "larch.toml:3:13");
  CHECK(!front.number("absent"));
  CHECK_NOTHROW(root.finish());
}

TEST_CASE("a value of the wrong type is refused where it stands, with an example", "[io]") {
  const TomlTable front = *parse("[front]\nstroke_mm = \"abc\"\nclicks = 8.0\n").table("front");
  CHECK(refusal([&] { front.need_number("stroke_mm", stroke_limits); }) ==
        "larch.toml:2:13: front.stroke_mm = \"abc\": must be a number in mm; write for example "
        "stroke_mm = 170.0");
  CHECK_THAT(refusal([&] { front.integer("clicks", 1, 99); }),
             StartsWith("larch.toml:3:10: front.clicks = 8.0: must be a whole number"));
}

TEST_CASE("a number outside its limits, or no number at all, is refused", "[io]") {
  const TomlTable root = parse("stroke_mm = 1700\nratio = nan\nrate_hz = inf\nshare = 1.0\n");
  CHECK(refusal([&] { root.number("stroke_mm", stroke_limits); }) ==
        "larch.toml:1:13: stroke_mm = 1700: must be from 10 to 500 mm; write for example "
        "stroke_mm = 170.0");
  CHECK_THAT(refusal([&] { root.number("ratio"); }), Contains("must be a finite number"));
  CHECK_THAT(refusal([&] { root.number("rate_hz"); }), Contains("must be a finite number in Hz"));
  const Limits open{.least = 0.0, .most = 1.0, .ends_excluded = true};
  CHECK_THAT(refusal([&] { root.number("share", open); }), Contains("must be above 0 and below 1"));
}

TEST_CASE("a whole number that a double cannot hold is refused, not rounded", "[io]") {
  const TomlTable root = parse("a = 9007199254740993\nb = 9007199254740992\n");
  CHECK_THAT(refusal([&] { root.number("a"); }), Contains("too large"));
  CHECK(root.number("b") == 9007199254740992.0);
}

TEST_CASE("a key nobody asked for is refused with the nearest known one", "[io]") {
  const TomlTable root = parse("[front]\nstroke_mm = 170.0\nfriction = 15.0\n");
  const TomlTable front = *root.table("front");
  front.number("stroke_mm");
  front.number("friction_n");
  CHECK(refusal([&] { root.finish(); }) ==
        "larch.toml:3:1: front.friction: unknown key; did you mean friction_n?");
}

TEST_CASE("finish reports the first unknown key of the file, inline tables included", "[io]") {
  const TomlTable root = parse("a = { b = 1, c = 2 }\nzebra = 3\n");
  root.table("a")->number("b");
  CHECK(refusal([&] { root.finish(); }) ==
        "larch.toml:1:14: a.c: unknown key; remove it, or correct its name");
}

TEST_CASE("a table that nobody opened, but that was asked for as a value, is left alone", "[io]") {
  const TomlTable root = parse("[set]\n\"front.low_speed_compression\" = 4\n");
  REQUIRE(root.has("set"));
  CHECK_NOTHROW(root.finish());
  const auto entries = root.table("set")->entries();
  REQUIRE(entries.size() == 1);
  CHECK(entries[0].first == "front.low_speed_compression");
  CHECK(entries[0].second.integer() == 4);
  CHECK_NOTHROW(root.finish());
}

TEST_CASE("a missing key names the table and what to add, or the misspelt key", "[io]") {
  const TomlTable root = parse("name = \"x\"\n\n[front]\nother = 1\n[rear]\nstroke_m = 0.06\n");
  CHECK(refusal([&] { root.table("front")->need_number("stroke_mm", stroke_limits); }) ==
        "larch.toml:3:1: front.stroke_mm is missing; add for example stroke_mm = 170.0");
  CHECK(refusal([&] { root.table("rear")->need_number("stroke_mm", stroke_limits); }) ==
        "larch.toml:6:1: rear.stroke_m: unknown key; did you mean stroke_mm?");
  CHECK(refusal([&] { root.need("schema", "schema = \"clickwise-bike-1\""); }) ==
        "larch.toml: schema is missing; add for example schema = \"clickwise-bike-1\"");
}

TEST_CASE("a word outside the choice is refused with the nearest one", "[io]") {
  const TomlTable root = parse("unit = \"sec\"\nkind = \"hydraulik\"\n");
  CHECK_THAT(refusal([&] {
               root.choice("kind", {"hydraulic", "dyno", "assumed"});
             }),
             StartsWith("larch.toml:2:8: kind = \"hydraulik\": must be one of \"hydraulic\", "
                        "\"dyno\", \"assumed\"; write for example kind = \"hydraulic\""));
  CHECK_THAT(refusal([&] {
               root.choice("unit", {"s", "ms", "us"});
             }),
             Contains("one of \"s\", \"ms\", \"us\""));
}

TEST_CASE("rows of the wrong shape are refused at the row", "[io]") {
  const TomlTable root = parse("a = [[1, 2], [3]]\nb = [1, 2]\nc = [[1, 2], [3, \"x\"]]\n");
  CHECK_THAT(refusal([&] { root.find("a")->rows(2); }), StartsWith("larch.toml:1:14: a[2] = […]"));
  CHECK_THAT(refusal([&] { root.find("b")->rows(2); }), StartsWith("larch.toml:2:6: b[1] = 1"));
  CHECK_THAT(refusal([&] { root.find("c")->rows(2); }),
             StartsWith("larch.toml:3:18: c[2][2] = \"x\": must be a number"));
  CHECK_THAT(refusal([&] { root.find("a")->rows(2, 3); }), StartsWith("larch.toml:1:5: a = […]"));
}

TEST_CASE("text that is not TOML is refused with line and column", "[io]") {
  CHECK_THAT(refusal([&] { parse("a = 1\nb = = 2\n"); }),
             StartsWith("larch.toml:2:5: this is not TOML: "));
  CHECK_THAT(refusal([&] { parse("a = 1\na = 2\n"); }), StartsWith("larch.toml:2:"));
  CHECK_THAT(refusal([&] { parse("[front\n"); }), StartsWith("larch.toml:1:"));
  CHECK_THAT(refusal([&] { parse(std::string("a = 1\0", 6)); }), StartsWith("larch.toml:1:"));
}

TEST_CASE("a control character in a value does not reach the terminal", "[io]") {
  const TomlTable root = parse("a = \"\\u001b[31m\"\n");
  CHECK_THAT(refusal([&] { root.number("a"); }), Contains("a = \"?[31m\""));
}

TEST_CASE("a deeply nested text is refused, and does not exhaust the stack", "[io]") {
  CHECK_THROWS_AS(parse("a = " + std::string(100000, '[')), clickwise::core::InputError);
}

TEST_CASE("a byte-order mark and CRLF ends are accepted", "[io]") {
  CHECK(parse("\xEF\xBB\xBF"
              "a = 1\r\nb = 2\r\n")
            .number("b") == 2.0);
}

TEST_CASE("random damage to a text either parses or is refused, and never crashes", "[io]") {
  const std::string good = "[front]\nstroke_mm = 170.0\npoints = [[0, 90], [40, 300]]\n";
  std::mt19937 random(7);
  int refused = 0;
  for (int round = 0; round < 2000; ++round) {
    std::string text = good;
    for (int hit = 0; hit < 3; ++hit)
      text[random() % text.size()] = static_cast<char>(random() % 256);
    try {
      parse(text);
    } catch (const clickwise::core::InputError& error) {
      ++refused;
      CHECK(error.place().line >= 1);
    }
  }
  CHECK(refused > 0);
}

TEST_CASE("a file that is not there, a folder and a giant are refused by name", "[io]") {
  CHECK_THAT(refusal([] { read_toml("/nonexistent/larch.toml"); }),
             StartsWith("/nonexistent/larch.toml: cannot be opened"));
  const auto folder = std::filesystem::temp_directory_path();
  CHECK_THAT(refusal([&] { read_toml(folder.string()); }), Contains("is a folder"));
  const auto giant = folder / "clickwise_toml_test_giant.toml";
  std::ofstream(giant) << std::string((16u << 20) + 1, '#');
  CHECK_THAT(refusal([&] { read_toml(giant.string()); }), Contains("larger than 16 MiB"));
  std::filesystem::remove(giant);
}

TEST_CASE("the nearest word counts edits and swaps, and gives up on strangers", "[io]") {
  const std::vector<std::string> keys{"stroke_mm", "friction_n", "tyre"};
  CHECK(nearest_word("strok_mm", keys) == "stroke_mm");
  CHECK(nearest_word("tyer", keys) == "tyre");
  CHECK(nearest_word("stroke", keys) == "stroke_mm");
  CHECK(nearest_word("wheelbase", keys).empty());
  CHECK(nearest_word("x", {"y"}).empty());
  CHECK(nearest_word("", keys).empty());
}
