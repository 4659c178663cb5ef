// The design standard that the tests use: the one that comes with the program.
#pragma once

#include "standards/embedded.hpp"

namespace entrain::timing::sample {

inline standards::DesignStandard standard(const std::string& id = "kinematic-us") {
  auto found = standards::find_standard(id, "test");
  return found ? *found : standards::DesignStandard{};
}

}  // namespace entrain::timing::sample
