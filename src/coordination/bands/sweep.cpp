#include "coordination/bands/sweep.hpp"

#include <algorithm>

namespace entrain::bands {

Sweep::Entry Sweep::look(const SweepStation& station, int index, const std::vector<SweepTerm>& terms, Tick phi, Tick best) {
  const Tick period = station.period;
  Tick level = -unlimited;
  for (int t = station.begin; t < station.end; ++t) {
    Tick z = phi + terms[t].c;
    while (z >= period) z -= period;
    level = std::max(level, terms[t].reserve - z + phi);
  }
  Tick next = unlimited;
  for (int t = station.begin; t < station.end; ++t) {
    Tick z = phi + terms[t].c;
    while (z >= period) z -= period;
    const Tick reset = phi + period - z;
    if (reset < next && terms[t].reserve > best && terms[t].reserve + reset > level) next = reset;
  }
  return {level, next, index};
}

void Sweep::sink(std::size_t at) {
  const std::size_t size = m_heap.size();
  const Entry moving = m_heap[at];
  for (std::size_t child = 2 * at + 1; child < size; child = 2 * at + 1) {
    if (child + 1 < size && m_heap[child + 1].level < m_heap[child].level) ++child;
    if (m_heap[child].level >= moving.level) break;
    m_heap[at] = m_heap[child];
    at = child;
  }
  m_heap[at] = moving;
}

void Sweep::build(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick best) {
  m_heap.clear();
  for (std::size_t i = 0; i < stations.size(); ++i) m_heap.push_back(look(stations[i], static_cast<int>(i), terms, 0, best));
  for (std::size_t i = m_heap.size() / 2; i-- > 0;) sink(i);
}

Peak Sweep::highest(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle) {
  if (stations.empty()) return {unlimited, 0};
  build(stations, terms, -unlimited);
  Peak peak{-unlimited, 0};
  for (Tick phi = 0;;) {
    Entry& top = m_heap.front();
    if (top.next <= phi) {
      top = look(stations[static_cast<std::size_t>(top.station)], top.station, terms, phi, peak.value);
      sink(0);
      continue;
    }
    if (top.level - phi > peak.value) peak = {top.level - phi, phi};
    if (top.next >= cycle) return peak;
    phi = top.next;
  }
}

std::vector<int> Sweep::blockers(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle, Tick value) {
  std::vector<int> found;
  if (stations.empty()) return found;
  build(stations, terms, value);
  for (Tick phi = 0;;) {
    Entry& top = m_heap.front();
    if (top.next <= phi) {
      top = look(stations[static_cast<std::size_t>(top.station)], top.station, terms, phi, value);
      sink(0);
      continue;
    }
    if (top.level - phi > value) return {};
    found.push_back(top.station);
    if (top.next >= cycle) break;
    phi = top.next;
  }
  std::sort(found.begin(), found.end());
  found.erase(std::unique(found.begin(), found.end()), found.end());
  return found;
}

}  // namespace entrain::bands
