#include "timing/group_times.hpp"

#include <algorithm>
#include <limits>

namespace entrain::timing {

int least_split_s(const Group& group) {
  const Tenths need = std::max(group.minimum_green + change_time(group), group.pedestrian_need);
  return round_up_to_second(need).count / 10;
}

double flow_ratio(const SignalDesign& design, const Group& group, const std::vector<double>& flows_vph) {
  double ratio = 0;
  for (const int i : group.lane_groups) {
    const auto at = static_cast<std::size_t>(i);
    ratio = std::max(ratio, flows_vph[at] / design.lane_groups[at].saturation_flow_vph);
  }
  return ratio;
}

double degree_of_saturation(double ratio, double cycle_s, double effective_green_s) {
  if (ratio <= 0) return 0;
  if (effective_green_s <= 0) return std::numeric_limits<double>::infinity();
  return ratio * cycle_s / effective_green_s;
}

const Conflict* find_conflict(const SignalDesign& design, int a, int b) {
  const auto found = std::find_if(design.conflicts.begin(), design.conflicts.end(), [&](const Conflict& conflict) {
    return (conflict.a == a && conflict.b == b) || (conflict.a == b && conflict.b == a);
  });
  return found == design.conflicts.end() ? nullptr : &*found;
}

int find_group(const SignalDesign& design, const std::string& id) {
  for (std::size_t i = 0; i < design.groups.size(); ++i)
    if (design.groups[i].id == id) return static_cast<int>(i);
  return -1;
}

std::string list_of(const std::vector<std::string>& words) {
  std::string text;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (i > 0) text += i + 1 == words.size() ? " and " : ", ";
    text += words[i];
  }
  return text;
}

}  // namespace entrain::timing
