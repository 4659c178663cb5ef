// Reading UTF-8 that may be broken. Private to this room.
#pragma once

#include <string_view>
#include <vector>

namespace entrain::report {

struct CodePoint {
  char32_t value = 0;
  std::string_view bytes;  // as they stand in the text
  bool valid = false;      // shortest form, no surrogate, at most U+10FFFF
};

// Every byte of `text` lies in exactly one element; an invalid sequence gives one element a byte.
std::vector<CodePoint> code_points(std::string_view text);

// Embeds, overrides or isolates the direction of what follows.
bool turns_direction(char32_t value);
// Hebrew, Arabic and their neighbours.
bool is_right_to_left(char32_t value);

}  // namespace entrain::report
