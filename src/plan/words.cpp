#include "plan/plan_text.hpp"

namespace entrain::plan {

std::string_view word(RightOfWay value) { return value == RightOfWay::with_protection ? "protected" : "permissive"; }

std::string_view word(GroupKind value) {
  constexpr std::string_view words[] = {"vehicle", "pedestrian", "bicycle"};
  return words[static_cast<int>(value)];
}

std::string_view word(Service value) { return value == Service::every_cycle ? "every_cycle" : "on_call"; }

std::string_view word(Operation value) {
  constexpr std::string_view words[] = {"pretimed", "coordinated_actuated", "free"};
  return words[static_cast<int>(value)];
}

std::string_view word(Turn value) {
  constexpr std::string_view words[] = {"L", "T", "R", "U"};
  return words[static_cast<int>(value)];
}

std::string_view word(ReferenceInstant value) {
  constexpr std::string_view words[] = {"begin_of_green", "begin_of_yellow", "begin_of_red", "begin_of_pedestrian_clearance"};
  return words[static_cast<int>(value)];
}

std::string_view word(TrafficSide value) { return value == TrafficSide::right ? "right" : "left"; }

}  // namespace entrain::plan
