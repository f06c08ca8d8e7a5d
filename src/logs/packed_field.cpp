#include "packed_field.hpp"

#include <algorithm>
#include <boost/endian/conversion.hpp>
#include <cmath>

namespace clickwise::logs {

namespace {

namespace endian = boost::endian;
using bike::FieldType;

template <class Value, endian::order order>
void load(const char* at, std::size_t frame_bytes, std::vector<double>& values) {
  for (double& value : values) {
    value = static_cast<double>(endian::endian_load<Value, sizeof(Value), order>(
        reinterpret_cast<const unsigned char*>(at)));
    at += frame_bytes;
  }
}

template <class Value>
void load(const char* at, const FieldPlace& place, std::vector<double>& values) {
  if (place.big_endian)
    load<Value, endian::order::big>(at, place.frame_bytes, values);
  else
    load<Value, endian::order::little>(at, place.frame_bytes, values);
}

void load_as(const char* at, const FieldPlace& place, std::vector<double>& values) {
  switch (place.type) {
    case FieldType::u8:
      return load<std::uint8_t>(at, place, values);
    case FieldType::i8:
      return load<std::int8_t>(at, place, values);
    case FieldType::u16:
      return load<std::uint16_t>(at, place, values);
    case FieldType::i16:
      return load<std::int16_t>(at, place, values);
    case FieldType::u32:
      return load<std::uint32_t>(at, place, values);
    case FieldType::i32:
      return load<std::int32_t>(at, place, values);
    case FieldType::u64:
      return load<std::uint64_t>(at, place, values);
    case FieldType::i64:
      return load<std::int64_t>(at, place, values);
    case FieldType::f32:
      return load<float>(at, place, values);
    case FieldType::f64:
      return load<double>(at, place, values);
  }
}

// Of an unsigned counter, the value behind its last; 0: it does not overflow.
double overflow_of(FieldType type) {
  if (type == FieldType::u8) return 0x1p8;
  if (type == FieldType::u16) return 0x1p16;
  return type == FieldType::u32 ? 0x1p32 : 0.0;
}

std::vector<double> differences(const std::vector<double>& values, double overflow) {
  std::vector<double> steps;
  for (std::size_t i = 1; i < values.size(); ++i) {
    const double step = values[i] - values[i - 1];
    const double undone = step + overflow;
    steps.push_back(step < 0.0 && undone < overflow / 64.0 ? undone : step);
  }
  return steps;
}

}  // namespace

std::vector<double> field_values(std::string_view file, const FieldPlace& place, std::size_t most) {
  const std::size_t first_end = place.first_byte + bike::size_of(place.type);
  if (first_end > file.size()) return {};
  std::vector<double> values(std::min(most, (file.size() - first_end) / place.frame_bytes + 1));
  load_as(file.data() + place.first_byte, place, values);
  return values;
}

Steps steps_of(std::string_view file, const FieldPlace& place, std::size_t most) {
  constexpr double widest = 3.0;
  std::vector<double> steps = differences(field_values(file, place, most), overflow_of(place.type));
  std::erase_if(steps, [](double step) { return std::isnan(step); });
  if (steps.size() < 2) return {};
  std::vector<double> sorted = steps;
  const auto middle = sorted.begin() + static_cast<std::ptrdiff_t>(sorted.size() / 2);
  std::nth_element(sorted.begin(), middle, sorted.end());
  const double usual = *middle;
  if (!(usual > 0.0)) return {};
  const auto even = std::count_if(steps.begin(), steps.end(), [&](double step) {
    return step > usual / widest && step < usual * widest;
  });
  return {usual, static_cast<double>(even) / static_cast<double>(steps.size())};
}

}  // namespace clickwise::logs
