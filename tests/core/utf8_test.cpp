#include "clickwise/core/utf8.hpp"

#include <catch2/catch.hpp>
#include <string>

using clickwise::core::as_utf8;

TEST_CASE("UTF-8 is left as it is", "[core]") {
  // RFC 3629 section 7 gives the octets of the second and third example.
  for (const std::string text :
       {"", "fork_adc", "A\xE2\x89\xA2\xCE\x91.", "\xED\x95\x9C\xEA\xB5\xAD\xEC\x96\xB4",
        "\xF0\xA3\x8E\xB4", "\xF4\x8F\xBF\xBF", "\x7F"})
    CHECK(as_utf8(text) == text);
}

TEST_CASE("other bytes are taken for ISO 8859-1", "[core]") {
  CHECK(as_utf8("Winkel \xB0") == "Winkel \xC2\xB0");
  CHECK(as_utf8("\xFF") == "\xC3\xBF");
}

TEST_CASE("sequences that RFC 3629 forbids are not UTF-8", "[core]") {
  for (const std::string text :
       {"\xC0\x80", "\xC1\xBF", "\xE0\x9F\xBF", "\xED\xA0\x80", "\xF0\x8F\xBF\xBF",
        "\xF4\x90\x80\x80", "\xF5\x80\x80\x80", "\x80", "a\xC3", "\xE2\x82"})
    CHECK(as_utf8(text) != text);
}
