#include "coordination/bands/fit_station.hpp"

#include <algorithm>

namespace entrain::bands {

void StationFit::add_common(std::vector<Piece>& to, const Piece& a, const Piece& b, Tick period) {
  const Tick delta = wrap(b.from - a.from, period);  // b begins so much after a does
  if (delta <= a.length) to.push_back({a.from + delta, std::min(a.length - delta, b.length)});
  const Tick rest = delta - period + b.length;  // what reaches into a of the turn before
  if (rest >= 0 && delta > 0) to.push_back({a.from, std::min(a.length, rest)});
}

// Keeps the offsets that also serve this visit; false if none is left.
bool StationFit::meet(const CompiledStation& station, const Visit& visit, int option, const BandDemand& demand,
                      const Grid& grid) {
  m_next.clear();
  for (const Slot& slot : visit.slots[static_cast<std::size_t>(option)]) {
    const Tick spare = slot.duration - demand.width;
    if (spare < 0) continue;
    if (slot.open) return true;
    Piece arc{demand.edge + visit.shift - slot.start - spare, spare};
    if (grid.whole_seconds) {
      const Tick to = grid.origin + second_floor(arc.from + arc.length - grid.origin);
      arc.from = grid.origin + second_ceil(arc.from - grid.origin);
      if (to < arc.from) continue;
      arc.length = to - arc.from;
    }
    for (const Piece& piece : m_pieces) add_common(m_next, piece, arc, station.period);
  }
  std::swap(m_pieces, m_next);
  return !m_pieces.empty();
}

std::optional<Placed> StationFit::fit(const CompiledStation& station, int index, const std::vector<int>& options,
                                      const std::vector<BandDemand>& demands, const Grid& grid, bool is_fixed,
                                      Tick fixed) {
  for (const int option : options) {
    if (is_fixed)
      m_pieces.assign(1, {fixed, 0});
    else
      m_pieces.assign(1, {grid.origin, station.period});
    Grid used = grid;
    if (is_fixed) used.whole_seconds = false;
    const bool fits = std::all_of(station.visits.begin(), station.visits.end(), [&](const Visit& visit) {
      const BandDemand& demand = demands[static_cast<std::size_t>(visit.frame)];
      return !demand.active || meet(station, visit, option, demand, used);
    });
    if (!fits) continue;
    const auto longest = std::max_element(m_pieces.begin(), m_pieces.end(),
                                          [](const Piece& a, const Piece& b) { return a.length < b.length; });
    return Placed{index, option, wrap(longest->from, station.period), longest->length};
  }
  return std::nullopt;
}

}  // namespace entrain::bands
