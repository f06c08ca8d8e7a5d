#include <bit>
#include <catch2/catch.hpp>
#include <cmath>
#include <cstdint>
#include <string>

#include "clickwise/logs/facts.hpp"
#include "clickwise/logs/log.hpp"
#include "support/log_file.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using bike::FieldType;
using Catch::Matchers::Contains;

namespace {

// Bytes of frames, written by hand: the least significant byte first or last.
class Frames {
public:
  explicit Frames(bool big_endian) : big_(big_endian) {}

  Frames& add(std::uint64_t value, std::size_t bytes) {
    for (std::size_t i = 0; i < bytes; ++i)
      bytes_ += static_cast<char>(value >> (8 * (big_ ? bytes - 1 - i : i)) & 0xFFU);
    return *this;
  }
  const std::string& bytes() const { return bytes_; }

private:
  bool big_;
  std::string bytes_;
};

bike::LogFormat time_and_fork(bool big_endian = false, std::size_t header_bytes = 0) {
  bike::LogFormat format;
  format.packed = bike::PackedFrames{
      big_endian, header_bytes, {{"t_us", FieldType::u32}, {"fork_adc", FieldType::u16}}};
  format.time = bike::TimeColumn{{"t_us", 0}, 1e-6};
  return format;
}

// A clock of 1 kHz from `start_us` on, and readings that count up from 1000.
std::string ramp(std::size_t frames, std::uint32_t start_us = 0, bool big_endian = false) {
  Frames bytes(big_endian);
  for (std::size_t i = 0; i < frames; ++i)
    bytes.add(start_us + static_cast<std::uint32_t>(1000 * i), 4).add(1000 + i, 2);
  return bytes.bytes();
}

const std::vector<bike::ColumnRef> fork_only{{"fork_adc", 0}};

}  // namespace

TEST_CASE("every type of field is read in both byte orders", "[logs]") {
  for (const bool big : {false, true}) {
    Frames bytes(big);
    // The largest and least of each, and 0.1f = 3dcccccd, 1.0f / 3 = 3eaaaaab (IEEE 754-2019;
    // numpy): the floats next to them.
    for (std::uint64_t i = 0; i < 3; ++i)
      bytes.add(i, 1)
          .add(0x80, 1)
          .add(0xFFFF, 2)
          .add(0x8000, 2)
          .add(0xFFFFFFFF, 4)
          .add(0x80000000, 4)
          .add(std::uint64_t{1} << 63U, 8)
          .add(~std::uint64_t{0}, 8)
          .add(0x3dcccccd, 4)
          .add(std::bit_cast<std::uint64_t>(0.1 + 0.2), 8);
    const test::LogFile file(bytes.bytes());
    bike::LogFormat format;
    format.rate_hz = 100.0;
    format.packed = bike::PackedFrames{big,
                                       0,
                                       {{"u8", FieldType::u8},
                                        {"i8", FieldType::i8},
                                        {"u16", FieldType::u16},
                                        {"i16", FieldType::i16},
                                        {"u32", FieldType::u32},
                                        {"i32", FieldType::i32},
                                        {"u64", FieldType::u64},
                                        {"i64", FieldType::i64},
                                        {"f32", FieldType::f32},
                                        {"f64", FieldType::f64}}};
    std::vector<bike::ColumnRef> all;
    for (int i = 1; i <= 10; ++i) all.push_back({"", i});
    const run::Recording recording = logs::read_log(file.path(), format, all);
    const std::vector<double> expected{2.0,
                                       -128.0,
                                       65535.0,
                                       -32768.0,
                                       4294967295.0,
                                       -2147483648.0,
                                       0x1p63,
                                       -1.0,
                                       static_cast<double>(0.1F),
                                       0.30000000000000004};
    REQUIRE(recording.channels.size() == expected.size());
    for (std::size_t i = 0; i < expected.size(); ++i) {
      INFO(recording.channels[i].name << (big ? ", big" : ", little"));
      REQUIRE(recording.channels[i].readings.size() == 3);
      CHECK(recording.channels[i].readings[2] == expected[i]);
    }
  }
}

TEST_CASE("frames behind a header are read, and the clock's overflow is undone", "[logs]") {
  for (const bool big : {false, true}) {
    const test::LogFile file("HEAD" + ramp(500, 4294967295U - 200000U, big));
    const run::Recording recording = logs::read_log(file.path(), time_and_fork(big, 4), fork_only);
    REQUIRE(recording.t_s.size() == 500);
    CHECK(recording.interval_s == Approx(1e-3).epsilon(1e-9));
    CHECK(recording.t_s.back() == Approx(0.499).epsilon(1e-9));
    CHECK(recording.channels[0].readings[499] == 1499.0);
    CHECK(recording.faults.empty());
    CHECK_THAT(recording.notes.at(0), Contains("overflowed 1 times"));
  }
}

TEST_CASE("a frame cut in half at the end is left out and counted", "[logs]") {
  for (std::size_t cut = 1; cut < 6; ++cut) {
    const std::string bytes = ramp(300);
    const test::LogFile file(bytes.substr(0, bytes.size() - cut));
    const run::Recording recording = logs::read_log(file.path(), time_and_fork(), fork_only);
    CHECK(recording.t_s.size() == 299);
    CHECK(recording.faults.count(run::FaultKind::truncated) == 1);
  }
}

TEST_CASE("readings that are no finite numbers are missing", "[logs]") {
  Frames bytes(false);
  const float values[] = {1.0F, NAN, 2.0F, INFINITY, 3.0F};
  for (std::uint32_t i = 0; i < 50; ++i)
    bytes.add(1000 * i, 4).add(std::bit_cast<std::uint32_t>(values[i % 5]), 4);
  const test::LogFile file(bytes.bytes());
  bike::LogFormat format = time_and_fork();
  format.packed->frame[1].type = FieldType::f32;
  const run::Recording recording = logs::read_log(file.path(), format, fork_only);
  CHECK(recording.faults.count(run::FaultKind::missing) == 20);
  CHECK(std::isnan(recording.channels[0].readings[3]));
}

TEST_CASE("a wrong frame is refused, and the one that would fit is told", "[logs]") {
  const auto refused = [](const std::string& bytes, const bike::LogFormat& format) {
    const test::LogFile file(bytes);
    return test::refusal([&] { logs::read_log(file.path(), format, fork_only); });
  };
  SECTION("one field too many, at the end") {
    bike::LogFormat format = time_and_fork();
    format.packed->frame.push_back({"shock_adc", FieldType::u16});
    CHECK_THAT(refused(ramp(1000), format), Contains("8 bytes, little-endian") &&
                                                Contains("jumps about") &&
                                                Contains("with frames of 6 bytes in place of 8"));
  }
  SECTION("the other byte order") {
    CHECK_THAT(refused(ramp(1000), time_and_fork(true)), Contains("with endian = \"little\""));
  }
  SECTION("a header that nobody told") {
    // Readings that do not climb as a clock does.
    Frames bytes(false);
    for (std::size_t i = 0; i < 1000; ++i) bytes.add(1000 * i, 4).add(1000 + i * 7919 % 400, 2);
    CHECK_THAT(refused("HEAD" + bytes.bytes(), time_and_fork()), Contains("with header_bytes = 4"));
  }
  SECTION("no file of frames at all") {
    std::string noise;
    std::uint32_t state = 7;
    for (int i = 0; i < 6000; ++i)
      noise += static_cast<char>((state = state * 1664525U + 1013904223U) >> 24U);
    CHECK_THAT(refused(noise, time_and_fork()),
               Contains("jumps about") && Contains("check the fields") && !Contains("would run"));
  }
  SECTION("less than one frame") {
    CHECK_THAT(refused("abc", time_and_fork()), Contains("3 bytes, less than its header (0)"));
  }
  SECTION("a field that is not there") {
    bike::LogFormat format = time_and_fork();
    format.time->column = {"time_us", 0};
    CHECK_THAT(refused(ramp(10), format), Contains("\"time_us\"") && Contains("\"t_us\""));
  }
}

TEST_CASE("without a time field an odd end is told, for nothing proves the frame", "[logs]") {
  bike::LogFormat format = time_and_fork();
  format.time.reset();
  format.rate_hz = 1000.0;
  const test::LogFile file(ramp(100) + "x");
  const run::Recording recording = logs::read_log(file.path(), format, fork_only);
  CHECK_THAT(recording.notes.at(0), Contains("1 of the 6 bytes") && Contains("nothing proves"));
  CHECK(recording.faults.count(run::FaultKind::truncated) == 1);
}

TEST_CASE("the facts of packed frames are told as those of text", "[logs]") {
  const bike::LogFormat format = time_and_fork();
  const test::LogFile file(ramp(400));
  const logs::LogFacts facts = logs::inspect_log(file.path(), &format);
  CHECK(facts.binary_format == "packed frames of 6 bytes, little-endian");
  CHECK(facts.rows == 400);
  CHECK(facts.rate_hz == Approx(1000.0).epsilon(1e-9));
  REQUIRE(facts.columns.size() == 2);
  CHECK(facts.columns[1].least == 1000.0);
  CHECK(facts.columns[1].most == 1399.0);
  CHECK(facts.columns[1].resolution == 1.0);
  CHECK_THAT(test::refusal([&] { logs::inspect_log(file.path()); }), Contains("[log] packed = {"));
}
