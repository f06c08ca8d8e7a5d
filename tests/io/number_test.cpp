#include "clickwise/io/number.hpp"

#include <bit>
#include <catch2/catch.hpp>
#include <charconv>
#include <cmath>
#include <cstdint>
#include <random>
#include <string>
#include <vector>

#include "clickwise/io/delimited.hpp"

using namespace clickwise;

namespace {

double by_from_chars(const std::string& text) {
  double value = NAN;
  std::from_chars(text.data(), text.data() + text.size(), value);
  return value;
}

// Through the fast path of whole columns.
std::vector<double> by_column(const std::vector<std::string>& cells, char point = '.') {
  std::string text;
  for (const std::string& cell : cells) text += cell + ";0\n";
  text += "# enough text behind the last cell\n";
  io::TextLayout layout;
  layout.delimiter = ';';
  layout.point = point;
  layout.columns = 2;
  return io::read_columns(text, layout, {{0}}).columns[0].values;
}

double by_column(const std::string& cell, char point = '.') {
  return by_column(std::vector{cell}, point).at(0);
}

std::uint64_t bits(double value) {
  return std::bit_cast<std::uint64_t>(value);
}

}  // namespace

TEST_CASE("plain decimals of up to 19 digits are bit for bit those of std::from_chars",
          "[number]") {
  std::mt19937_64 random(20240611);
  std::vector<std::string> texts;
  for (int i = 0; i < 200000; ++i) {
    std::string text = random() % 3 == 0 ? "-" : "";
    const auto digits = 1 + random() % 19;
    const auto mark = random() % (digits + 1);
    for (std::uint64_t k = 0; k < digits; ++k) {
      if (k == mark && k > 0) text += '.';
      text += static_cast<char>('0' + random() % 10);
    }
    texts.push_back(text);
  }
  const std::vector<double> values = by_column(texts);
  for (std::size_t i = 0; i < texts.size(); ++i) {
    INFO(texts[i]);
    REQUIRE(bits(values.at(i)) == bits(by_from_chars(texts[i])));
    REQUIRE(bits(io::parse_number(texts[i])) == bits(by_from_chars(texts[i])));
  }
}

TEST_CASE("every byte in every place of a short cell is read as std::from_chars reads it",
          "[number]") {
  for (const std::string base :
       {"7", "42", "1.5", "-3.25", "123456789", "12345678.5", "0.000123456"})
    for (std::size_t place = 0; place < base.size(); ++place)
      for (int byte = 1; byte < 256; ++byte) {
        std::string text = base;
        text[place] = static_cast<char>(byte);
        if (std::string(";\n\r\"# \t+").find(text[place]) != std::string::npos) continue;
        double expected = NAN;
        const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), expected);
        if (end != text.data() + text.size() || error != std::errc{}) expected = NAN;
        INFO(text);
        if (std::isnan(expected))
          CHECK(std::isnan(by_column(text)));
        else
          CHECK(bits(by_column(text)) == bits(expected));
      }
}

TEST_CASE("shortest text of a double and back (IEEE 754-2019 section 5.12; check value 10h)",
          "[number]") {
  const std::pair<double, const char*> cases[] = {{0.1, "0.1"},
                                                  {0.1 + 0.2, "0.30000000000000004"},
                                                  {1e23, "1e+23"},
                                                  {9007199254740993.0, "9007199254740992"},
                                                  {1.0 / 3.0, "0.3333333333333333"},
                                                  {0x1p-20, "9.5367431640625e-07"}};
  for (const auto& [value, text] : cases) {
    CHECK(io::shortest_text(value) == text);
    CHECK(bits(io::parse_number(text)) == bits(value));
  }
}

TEST_CASE("the ends of the double range are read exactly (check value 10i)", "[number]") {
  CHECK(bits(io::parse_number("5e-324")) == 0x0000000000000001U);
  CHECK(bits(io::parse_number("2.2250738585072014e-308")) == 0x0010000000000000U);
  CHECK(bits(io::parse_number("1.7976931348623157e+308")) == 0x7fefffffffffffffU);
  CHECK(bits(io::parse_number("2.2250738585072011e-308")) == 0x000fffffffffffffU);
}

TEST_CASE("signs, blanks and decimal commas", "[number]") {
  CHECK(io::parse_number(" +2.5\r") == 2.5);
  CHECK(io::parse_number("\t-2.5e3 ") == -2500.0);
  CHECK(io::parse_number("2,5", ',') == 2.5);
  CHECK(by_column("-0012,50", ',') == -12.5);
  CHECK(std::signbit(by_column("-0.0000")));
  CHECK(by_column("5.") == 5.0);
  CHECK(by_column(".5") == 0.5);
}

TEST_CASE("what is no finite number is NaN", "[number]") {
  for (const char* text : {"", " ", "-", "+", ".", "+-1", "1.2.3", "1e999", "nan", "inf", "-inf",
                           "0x10", "12a", "1 2", "--1", "1,5", "1.5,0"})
    CHECK(std::isnan(io::parse_number(text)));
  CHECK(std::isnan(io::parse_number("1.5", ',')));
  CHECK(std::isnan(io::parse_number("1.234,5", ',')));
}
