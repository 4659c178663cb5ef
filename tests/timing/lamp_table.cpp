#include "lamp_table.hpp"

#include <cmath>

namespace entrain::timing::judge {
namespace {

using Lamps = std::vector<bool>;  // one a tenth

Lamps lit(const std::vector<Arc>& greens, int tenths, int longer) {
  Lamps lamps(static_cast<std::size_t>(tenths), false);
  for (const Arc& green : greens)
    for (int t = 0; t < green.duration.count + longer; ++t) lamps[static_cast<std::size_t>((green.start.count + t) % tenths)] = true;
  return lamps;
}

void look_at_pair(const SignalDesign& design, int tenths, const Allocation& allocation, int a, int b, Tenths intergreen, std::vector<std::string>& found) {
  const Group& first = design.groups[a];
  const int clearance = first.kind == GroupKind::pedestrian ? first.clearance.count : 0;
  const Lamps kept_off = lit(allocation.groups[a].greens, tenths, allocation.groups[a].greens.empty() ? 0 : clearance + intergreen.count);
  const Lamps other = lit(allocation.groups[b].greens, tenths, 0);
  for (int t = 0; t < tenths; ++t)
    if (kept_off[t] && other[t]) {
      found.push_back("groups " + first.id + " and " + design.groups[b].id + " clash at " + std::to_string(t) + " tenths");
      return;
    }
}

bool serves(const Group& group, const std::string& movement, bool permissive_only) {
  for (const Served& s : group.serves)
    if (s.movement == movement && (!permissive_only || (s.right_of_way == RightOfWay::permissive && !s.flashing_yellow_arrow))) return true;
  return false;
}

void look_for_traps(const SignalDesign& design, int tenths, const Allocation& allocation, std::vector<std::string>& found) {
  std::vector<Lamps> lamps;
  for (const auto& group : allocation.groups) lamps.push_back(lit(group.greens, tenths, 0));
  for (const OpposedPair& pair : design.opposed)
    for (int t = 0; t < tenths; ++t) {
      const int next = (t + 1) % tenths;
      bool ends = false, goes_on = false, oncoming = false;
      for (std::size_t g = 0; g < lamps.size(); ++g) {
        if (serves(design.groups[g], pair.turn, true) && lamps[g][t] && !lamps[g][next]) ends = true;
        if (serves(design.groups[g], pair.turn, false) && lamps[g][next]) goes_on = true;
        if (serves(design.groups[g], pair.opposing, false) && lamps[g][next]) oncoming = true;
      }
      if (ends && !goes_on && oncoming) {
        found.push_back(pair.turn + " is trapped by " + pair.opposing + " at " + std::to_string(t) + " tenths");
        return;
      }
    }
}

void look_at_group(const SignalDesign& design, int tenths, const Allocation& allocation, std::size_t g, std::vector<std::string>& found) {
  const Group& group = design.groups[g];
  const GroupGreen& own = allocation.groups[g];
  if (own.greens.empty() && !group.on_call) found.push_back("group " + group.id + " is never served");
  for (const Arc& green : own.greens) {
    if (green.start.count < 0 || green.start.count >= tenths) found.push_back("group " + group.id + " starts outside the cycle");
    if (green.duration < group.minimum_green) found.push_back("group " + group.id + " is green for less than its minimum");
    if (group.kind == GroupKind::pedestrian) {
      if (group.parent >= 0 && green.start != allocation.groups[group.parent].greens.front().start) found.push_back("group " + group.id + " does not start with its parent");
      continue;
    }
    if (green.duration.count == tenths) continue;
    if (!own.split.is_whole_second()) found.push_back("the split of group " + group.id + " is no whole second");
    if (own.split != green.duration + group.yellow + group.red_clearance) found.push_back("the split of group " + group.id + " is not its green and clearances");
    if (own.split < group.pedestrian_need) found.push_back("the people of group " + group.id + " do not fit");
    if (green.start.count % 10 != 0) found.push_back("group " + group.id + " does not start on a whole second");
  }
}

}  // namespace

std::vector<std::string> faults(const SignalDesign& design, int cycle_s, const Allocation& allocation) {
  const int tenths = cycle_s * 10;
  std::vector<std::string> found;
  if (allocation.groups.size() != design.groups.size()) return {"not one green a group"};
  for (std::size_t g = 0; g < design.groups.size(); ++g) look_at_group(design, tenths, allocation, g, found);
  for (const Conflict& c : design.conflicts) {
    look_at_pair(design, tenths, allocation, c.a, c.b, c.intergreen_ab, found);
    look_at_pair(design, tenths, allocation, c.b, c.a, c.intergreen_ba, found);
  }
  look_for_traps(design, tenths, allocation, found);
  const auto& reference = allocation.groups[design.reference_group].greens;
  if (reference.empty() || (reference.front().start.count != 0)) found.push_back("local zero is not the reference group's start");
  return found;
}

std::vector<std::string> ring_faults(const SignalDesign& design, int cycle_s, const Allocation& allocation) {
  std::vector<std::string> found = faults(design, cycle_s, allocation);
  if (!design.ring_barrier) return found;
  const auto& rings = design.ring_barrier->rings;
  int total = 0;
  for (std::size_t side = 0; side < rings.front().size(); ++side) {
    int longest = -1;
    for (const auto& ring : rings) {
      if (ring[side].empty()) continue;
      int own = 0;
      for (const int g : ring[side]) own += allocation.groups[g].split.count;
      if (longest >= 0 && own != longest) found.push_back("the rings do not meet at the barrier");
      longest = own;
    }
    total += longest;
  }
  if (total != cycle_s * 10) found.push_back("the splits add up to " + std::to_string(total) + " tenths");
  return found;
}

}  // namespace entrain::timing::judge
