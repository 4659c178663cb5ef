#include "coordination/bands/sweep.hpp"

#include <algorithm>

namespace entrain::bands {
namespace {

constexpr int most_bucket_visits = 6;

}  // namespace

bool Sweep::add_stairs(const SweepStation& station, const std::vector<SweepTerm>& terms, Tick cycle) {
  if (station.begin == station.end) return false;
  m_steps.clear();
  Tick level = -unlimited;  // at phi = 0
  for (int t = station.begin; t < station.end; ++t) {
    const SweepTerm& term = terms[static_cast<std::size_t>(t)];
    level = std::max(level, term.reserve - term.c);
    for (Tick at = station.period - term.c; at < cycle; at += station.period)
      m_steps.push_back({at, term.reserve + at});
  }
  for (std::size_t i = 1; i < m_steps.size(); ++i) {  // few: insertion
    const Step step = m_steps[i];
    std::size_t j = i;
    for (; j > 0 && m_steps[j - 1].at > step.at; --j) m_steps[j] = m_steps[j - 1];
    m_steps[j] = step;
  }
  for (const Step& step : m_steps) {
    if (step.level <= level) continue;
    m_stairs.push_back({step.at, level});
    level = step.level;
  }
  m_stairs.push_back({cycle, level});
  return true;
}

// Peaks at the ends of the stairs in m_some, where stairs that end later leave `level`.
Peak Sweep::best_of_some(Tick level, Peak best) {
  std::sort(m_some.begin(), m_some.end(), [](const Stair& a, const Stair& b) { return a.end > b.end; });
  for (std::size_t i = 0; i < m_some.size();) {
    const Tick phi = m_some[i].end, value = level - phi;
    if (value > best.value || (value == best.value && phi < best.phi)) best = {value, phi};
    for (; i < m_some.size() && m_some[i].end == phi; ++i) level = std::min(level, m_some[i].level);
  }
  return best;
}

Peak Sweep::highest_by_sorting(Tick cycle) {
  Tick lowest = unlimited, last = unlimited;
  m_some.clear();
  for (const Stair& stair : m_stairs) {
    lowest = std::min(lowest, stair.level);
    if (stair.end < cycle)
      m_some.push_back(stair);
    else
      last = std::min(last, stair.level);
  }
  return best_of_some(last, {lowest, 0});
}

Peak Sweep::highest_by_buckets(Tick cycle) {
  std::size_t count = 16;
  while (count * 2 < m_stairs.size() && count < 65536) count *= 2;
  const double scale = static_cast<double>(count) / static_cast<double>(cycle);
  const auto bucket_of = [&](Tick end) {
    return end == cycle ? count : std::min(count - 1, static_cast<std::size_t>(static_cast<double>(end) * scale));
  };
  m_lowest.assign(count + 1, unlimited);
  m_earliest.assign(count + 1, unlimited);
  for (const Stair& stair : m_stairs) {
    const std::size_t bucket = bucket_of(stair.end);
    m_lowest[bucket] = std::min(m_lowest[bucket], stair.level);
    m_earliest[bucket] = std::min(m_earliest[bucket], stair.end);
  }
  for (std::size_t b = count; b-- > 0;) m_lowest[b] = std::min(m_lowest[b], m_lowest[b + 1]);
  Peak best{m_lowest[0], 0};
  for (int visit = 0; visit < most_bucket_visits; ++visit) {
    std::size_t chosen = count;
    Tick bound = best.value;
    for (std::size_t b = 0; b < count; ++b) {
      const Tick reach = m_lowest[b + 1] - m_earliest[b];
      if (reach > bound || (reach == bound && chosen == count && m_earliest[b] < best.phi)) bound = reach, chosen = b;
    }
    if (chosen == count) return best;
    m_some.clear();
    for (const Stair& stair : m_stairs)
      if (bucket_of(stair.end) == chosen) m_some.push_back(stair);
    best = best_of_some(m_lowest[chosen + 1], best);
    m_earliest[chosen] = unlimited;
  }
  return highest_by_sorting(cycle);
}

Peak Sweep::highest(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle) {
  if (stations.empty()) return {unlimited, 0};
  m_stairs.clear();
  for (const SweepStation& station : stations)
    if (!add_stairs(station, terms, cycle)) return {-unlimited, 0};
  return highest_by_buckets(cycle);
}

// Fewest intervals that cover the circle from 0 on: among the stairs whose level is low enough at phi, the one that
// lasts longest.
std::vector<int> Sweep::blockers(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms,
                                 Tick cycle, Tick value) {
  struct Owned {
    Tick level = 0, end = 0;
    int station = 0;
  };
  std::vector<Owned> all;
  for (std::size_t s = 0; s < stations.size(); ++s) {
    m_stairs.clear();
    if (!add_stairs(stations[s], terms, cycle)) return {static_cast<int>(s)};
    for (const Stair& stair : m_stairs) all.push_back({stair.level, stair.end, static_cast<int>(s)});
  }
  std::sort(all.begin(), all.end(), [](const Owned& a, const Owned& b) {
    return a.level != b.level ? a.level < b.level : a.station < b.station;
  });
  std::vector<int> found;
  Owned longest{0, 0, -1};
  std::size_t next = 0;
  for (Tick phi = 0; phi < cycle; phi = longest.end) {
    for (; next < all.size() && all[next].level - phi <= value; ++next)
      if (all[next].end > longest.end) longest = all[next];
    if (longest.end <= phi) return {};
    found.push_back(longest.station);
  }
  std::sort(found.begin(), found.end());
  found.erase(std::unique(found.begin(), found.end()), found.end());
  return found;
}

}  // namespace entrain::bands
