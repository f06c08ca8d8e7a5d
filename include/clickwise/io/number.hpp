// Numbers as text, the same in every country.
#pragma once

#include <string>
#include <string_view>

namespace clickwise::io {

// The double nearest to a decimal number (bit for bit that of std::from_chars), with optional sign,
// fraction and exponent. Blanks and carriage returns around it are ignored; `point` is the decimal
// mark, '.' or ','. NaN where the text is no number, is "nan" or "inf", or does not fit a double.
double parse_number(std::string_view text, char point = '.');

// The shortest text that parse_number turns into the same double again ("0.1", "1e+23"); "nan",
// "inf" and "-inf" for what is no number.
std::string shortest_text(double value);

}  // namespace clickwise::io
