#include "timing/turn_trap.hpp"

#include <algorithm>

#include "timing/group_times.hpp"

namespace entrain::timing {
namespace {

const Served* served_by(const Group& group, const std::string& movement) {
  const auto found = std::find_if(group.serves.begin(), group.serves.end(), [&](const Served& s) { return s.movement == movement; });
  return found == group.serves.end() ? nullptr : &*found;
}

bool is_on(const Circle& circle, const std::vector<Arc>& greens, Tenths t) {
  return std::any_of(greens.begin(), greens.end(), [&](const Arc& green) { return circle.contains(green, t); });
}

bool goes_on_elsewhere(const SignalDesign& design, const Circle& circle, const std::vector<std::vector<Arc>>& greens,
                       const std::string& turn, Tenths t) {
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (served_by(design.groups[g], turn) && is_on(circle, greens[g], t)) return true;
  return false;
}

}  // namespace

std::vector<Trap> possible_traps(const SignalDesign& design) {
  std::vector<Trap> traps;
  const int n = static_cast<int>(design.groups.size());
  for (const OpposedPair& pair : design.opposed)
    for (int g = 0; g < n; ++g) {
      const Served* turn = served_by(design.groups[static_cast<std::size_t>(g)], pair.turn);
      if (!turn || turn->right_of_way != RightOfWay::permissive || turn->flashing_yellow_arrow) continue;
      for (int h = 0; h < n; ++h)
        if (h != g && served_by(design.groups[static_cast<std::size_t>(h)], pair.opposing) && !find_conflict(design, g, h))
          traps.push_back({pair.turn, pair.opposing, g, h});
    }
  return traps;
}

std::optional<Trap> find_trap(const SignalDesign& design, const std::vector<Trap>& candidates, Tenths cycle,
                              const std::vector<std::vector<Arc>>& greens) {
  const Circle circle(cycle);
  for (const Trap& trap : candidates)
    for (const Arc& green : greens[static_cast<std::size_t>(trap.turn_group)]) {
      if (green.duration == cycle) continue;
      const Tenths end = circle.end(green);
      if (is_on(circle, greens[static_cast<std::size_t>(trap.opposing_group)], end) &&
          !goes_on_elsewhere(design, circle, greens, trap.turn, end))
        return trap;
    }
  return std::nullopt;
}

}  // namespace entrain::timing
