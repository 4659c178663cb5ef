// Numbers to text and back, the same on every machine and in every locale.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

namespace entrain {

// Fixed point with `decimals` digits, trailing zeros dropped, never "-0": 40.50 -> "40.5", 7.0 -> "7". Non-finite -> "-".
std::string number_text(double value, int decimals = 3);
// Fixed point with exactly `decimals` digits, never "-0.0".
std::string fixed_text(double value, int decimals);

// The whole of `text` (blanks around it allowed) as a finite number with a decimal point; nothing otherwise.
std::optional<double> parse_number(std::string_view text);
std::optional<std::int64_t> parse_whole_number(std::string_view text);

std::string_view trim(std::string_view text);

}  // namespace entrain
