// Ranges and rounding rules of a design standard's values. Private to this room.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "standards/design_standard.hpp"

namespace entrain::standards {

struct Limits {
  double least = 0, most = 0;
};

// What a value may be: its own least and most, else by the unit at the end of its key.
Limits limits_of(const std::string& key, const StandardValue& value);

std::optional<Rounding> rounding_of(std::string_view word);
std::string rounding_words();
inline bool is_whole_second_rule(Rounding rule) { return rule == Rounding::up_to_second; }
// Walk, pedestrian clearance and minimum green are whole seconds in a controller.
inline bool needs_whole_seconds(std::string_view key) { return key == "walk_s" || key == "pedestrian_clearance_s" || key == "minimum_green_s"; }

// Least above most, a sentence each: yellow, red clearance.
std::vector<std::string> crossed_limits(const DesignStandard& standard);

// Whether `to` would make intervals shorter than `from`.
bool is_less_cautious(const StandardValue& from, double to);

}  // namespace entrain::standards
