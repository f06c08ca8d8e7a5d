#include <catch2/catch.hpp>
#include <cmath>
#include <cstdint>
#include <fstream>
#include <limits>
#include <random>

#include "clickwise/io/hdf5_file.hpp"
#include "clickwise/io/hdf5_writer.hpp"
#include "support/log_file.hpp"
#include "support/refusal.hpp"

using namespace clickwise;
using Catch::Matchers::Contains;

namespace {

// Series longer than two chunks, so that a chunk's edge and a short last chunk are in them.
constexpr std::size_t long_series = 150001;

std::vector<float> noise(std::size_t count) {
  std::mt19937 random(5);
  std::normal_distribution<float> normal(80.0F, 30.0F);
  std::vector<float> values(count);
  for (float& value : values) value = normal(random);
  return values;
}

std::string contents(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

}  // namespace

TEST_CASE("an HDF5 file is told by its signature, also behind a user block", "[io]") {
  // HDF5 file format specification, superblock: 89 48 44 46 0d 0a 1a 0a.
  const std::string signature("\x89\x48\x44\x46\x0d\x0a\x1a\x0a");
  CHECK(io::is_hdf5(signature + "rest"));
  CHECK(io::is_hdf5(std::string(512, ' ') + signature));
  CHECK(io::is_hdf5(std::string(2048, ' ') + signature));
  CHECK_FALSE(io::is_hdf5(std::string(100, ' ') + signature));
  CHECK_FALSE(io::is_hdf5(""));
  CHECK_FALSE(io::is_hdf5(signature.substr(0, 7)));
  const test::LogFile file("");
  file.write(io::Hdf5Writer().finish());
  CHECK(contents(file.path()).starts_with(signature));
}

TEST_CASE("numbers and texts come back as they were written", "[io]") {
  const test::LogFile file("");
  std::vector<float> floats = noise(long_series);
  floats[7] = std::numeric_limits<float>::quiet_NaN();
  floats[8] = -0.0F;
  floats[9] = std::numeric_limits<float>::denorm_min();
  const std::vector<double> doubles{0.1, 1.0 / 3.0, 5e-324, 1.7976931348623157e+308};
  const std::vector<std::uint8_t> mask(long_series, 1);
  const std::vector<std::int64_t> counts{-1, 0, (1LL << 53) + 1};
  {
    io::Hdf5Writer writer;
    writer.group("/a");
    writer.data("/a/floats", std::span<const float>(floats), "mm");
    writer.data("/a/doubles", std::span<const double>(doubles), "s");
    writer.data("/a/mask", std::span<const std::uint8_t>(mask), "1");
    writer.data("/a/counts", std::span<const std::int64_t>(counts), "1");
    writer.data("/a/none", std::span<const double>(), "s");
    writer.text("/a/text", "two\nlines, \xC2\xB5", "text");
    writer.texts("/a/texts", {"one", "", "three"}, "text");
    writer.attribute("/a", "word", "caf\xC3\xA9");
    writer.attribute("/a", "empty", "");
    writer.attribute("/a", "number", 0.1);
    file.write(writer.finish());
  }
  const io::Hdf5File read(file.path());
  const auto fast = read.numbers({{"/a/floats", 1.0}, {"/a/doubles", 2.0}});
  const auto plain = read.numbers("/a/floats");
  REQUIRE(fast[0].size() == floats.size());
  REQUIRE(plain.size() == floats.size());
  std::size_t wrong = 0;
  for (std::size_t i = 0; i < floats.size(); ++i) {
    const auto expected = static_cast<double>(floats[i]);
    const auto same = [&](double value) {
      return (std::isnan(expected) && std::isnan(value)) ||
             (value == expected && std::signbit(value) == std::signbit(expected));
    };
    wrong += !same(fast[0][i]) || !same(plain[i]);
  }
  CHECK(wrong == 0);
  CHECK(fast[1][1] == 2.0 / 3.0);
  CHECK(read.numbers("/a/doubles") == doubles);
  CHECK(read.bytes("/a/mask") == mask);
  CHECK(read.numbers("/a/counts")[0] == -1.0);
  CHECK(read.numbers("/a/none").empty());
  CHECK(read.text("/a/text") == "two\nlines, \xC2\xB5");
  CHECK(read.texts("/a/texts") == std::vector<std::string>{"one", "", "three"});
  CHECK(read.text_attribute("/a", "word") == "caf\xC3\xA9");
  CHECK(read.text_attribute("/a", "empty") == "");
  CHECK(read.number_attribute("/a", "number") == 0.1);
  CHECK_FALSE(read.number_attribute("/a", "word"));
  CHECK_FALSE(read.text_attribute("/b", "word"));
  CHECK(read.has("/a/mask"));
  CHECK_FALSE(read.has("/b/mask"));
  const auto items = read.items("/a");
  REQUIRE(items.size() == 7);
  CHECK(items[2].name == "floats");
  CHECK(items[2].type == "float32");
  CHECK(items[2].units == "mm");
  CHECK(items[2].shape == std::vector<std::size_t>{long_series});
}

TEST_CASE("what is not there, or is of another kind, is named", "[io]") {
  const test::LogFile file("");
  {
    io::Hdf5Writer writer;
    writer.group("/a");
    writer.text("/a/text", "words", "text");
    file.write(writer.finish());
  }
  const io::Hdf5File read(file.path());
  CHECK_THAT(test::refusal([&] { read.numbers("/a/b"); }), Contains("no data set /a/b"));
  CHECK_THAT(test::refusal([&] { read.numbers("/a"); }), Contains("/a is a group"));
  CHECK_THAT(test::refusal([&] { read.numbers("/a/text"); }), Contains("no numbers (text)"));
  CHECK_THAT(test::refusal([&] { read.items("/c"); }), Contains("no group /c"));
  const test::LogFile text("t,a\n1,2\n");
  CHECK_THAT(test::refusal([&] { io::Hdf5File{text.path()}; }), Contains("no HDF5 file"));
}

TEST_CASE("a file cut off anywhere is refused, and a damaged chunk is never given", "[io]") {
  const test::LogFile file("");
  const std::vector<float> floats = noise(long_series);
  {
    io::Hdf5Writer writer;
    writer.data("/floats", std::span<const float>(floats), "mm");
    file.write(writer.finish());
  }
  const std::string whole = contents(file.path());
  for (const double share : {0.0001, 0.1, 0.5, 0.9, 0.9999}) {
    file.write(
        whole.substr(0, static_cast<std::size_t>(share * static_cast<double>(whole.size()))));
    CHECK_THAT(test::refusal([&] { io::Hdf5File{file.path()}; }),
               Contains("cut off or damaged") || Contains("no HDF5 file"));
  }
  // The chunks make up the most of the file: a flipped bit in the middle is in one of them.
  std::string flipped = whole;
  flipped[whole.size() / 2] = static_cast<char>(flipped[whole.size() / 2] ^ 4);
  file.write(flipped);
  const io::Hdf5File read(file.path());
  CHECK_THAT(test::refusal([&] {
               read.numbers({{"/floats", 1.0}});
             }),
             Contains("/floats cannot be read"));
  CHECK_THAT(test::refusal([&] { read.numbers("/floats"); }), Contains("/floats cannot be read"));
}
