// A small design standard for the tests, built in code.
#pragma once

#include "standards/design_standard.hpp"

namespace entrain::timing::sample {

inline standards::DesignStandard standard() {
  standards::DesignStandard standard;
  standard.id = "test";
  const auto set = [&](const char* key, double value) { standard.values[key] = {value, "invented for the tests", false}; };
  set("pedestrian_buffer_s", 3);
  standard.allowed = {{"opposed_turn", true}, {"turn_over_crossing", true}};
  return standard;
}

}  // namespace entrain::timing::sample
