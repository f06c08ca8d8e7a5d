// How values, numbers and units are written in messages.
#pragma once

#include <string>
#include <string_view>

#include "clickwise/io/toml.hpp"

namespace clickwise::io {

// "170.0": a number as TOML writes it.
std::string as_toml(double number);

// A value as the file has it, shortened and made printable.
std::string shown(const TomlNode& node);

// " in mm" for "stroke_mm"; empty for a key without a unit.
std::string unit_phrase(std::string_view key);

// "must be between 10 and 500 mm"
std::string limits_phrase(const Limits& limits, std::string_view key);

}  // namespace clickwise::io
