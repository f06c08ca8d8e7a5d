#include "clickwise/io/timestamp.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using clickwise::io::is_time_of_day;
using clickwise::io::parse_timestamp;

TEST_CASE("the examples of RFC 3339 section 5.8 (check values 10d, 10e)", "[timestamp]") {
  CHECK(std::abs(parse_timestamp("1985-04-12T23:20:50.52Z") - 482196050.52) < 1e-6);
  CHECK(parse_timestamp("1996-12-19T16:39:57-08:00") == 851042397.0);
  CHECK(parse_timestamp("1996-12-20T00:39:57Z") == 851042397.0);
  CHECK(std::abs(parse_timestamp("1937-01-01T12:00:27.87+00:20") - -1041337172.13) < 1e-6);
  CHECK(parse_timestamp("1990-12-31T23:59:60Z") == 662687999.0);
  CHECK(parse_timestamp("1990-12-31T15:59:60-08:00") == 662687999.0);
}

TEST_CASE("other ways to write the same moment", "[timestamp]") {
  const double moment = parse_timestamp("2016-05-02T15:39:29.250Z");
  CHECK(parse_timestamp("2016-05-02 15:39:29.25") == moment);
  CHECK(parse_timestamp(" 2016-05-02 15:39:29,25 \r") == moment);
  CHECK(parse_timestamp("02/05/2016 15:39:29.25") == moment);
  CHECK(parse_timestamp("02.05.2016 15:39:29.25") == moment);
  CHECK(parse_timestamp("2016-05-02T17:39:29.25+0200") == moment);
  CHECK(parse_timestamp("05/13/2016 00:00:00") == parse_timestamp("2016-05-13T00:00"));
}

TEST_CASE("an epoch taken off keeps microseconds of present years exact", "[timestamp]") {
  const double day = parse_timestamp("2023-10-27T00:00:00");
  CHECK(day == 1698364800.0);
  CHECK(parse_timestamp("2023-10-27T00:00:01.000001", day) == 1.000001);
}

TEST_CASE("a time of day counts from midnight", "[timestamp]") {
  CHECK(parse_timestamp("23:59:59.5") == 86399.5);
  CHECK(parse_timestamp("7:05:00") == 25500.0);
  CHECK(is_time_of_day("23:59:59.5"));
  CHECK_FALSE(is_time_of_day("2016-05-02 15:39:29"));
}

TEST_CASE("what is no moment is NaN", "[timestamp]") {
  for (const char* text : {"", "12", "1.5", "2016-05-02", "2016-13-01T00:00:00",
                           "2015-02-29T00:00:00", "2016-05-02T25:00:00", "2016-05-02T10:61:00",
                           "2016-05-02T10:00:00.", "2016-05-02T10:00:00x", "2016-05-02T10:00:00+2",
                           "10:00", "1:2:3", "99/99/2016 00:00:00", "2016/05/02T", "-12:00:00"})
    CHECK(std::isnan(parse_timestamp(text)));
}
