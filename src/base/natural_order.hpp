// The order in which people list ids: T2 before T10.
#pragma once

#include <string_view>

namespace entrain {

// Strict weak order: runs of digits compare by value, the rest byte by byte; ties by plain comparison.
bool natural_less(std::string_view a, std::string_view b);

struct NaturalLess {
  using is_transparent = void;
  bool operator()(std::string_view a, std::string_view b) const { return natural_less(a, b); }
};

}  // namespace entrain
