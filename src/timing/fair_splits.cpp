#include "timing/fair_splits.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>

#include "timing/group_times.hpp"

namespace entrain::timing {
namespace {

using Vector = std::vector<double>;  // sorted descending

Vector merged(const Vector& a, const Vector& b) {
  Vector out(a.size() + b.size());
  std::merge(a.begin(), a.end(), b.begin(), b.end(), out.begin(), std::greater<>());
  return out;
}

int sum_of(const std::vector<SplitNeed>& list) {
  int sum = 0;
  for (const SplitNeed& need : list) sum += need.least_s;
  return sum;
}

double degree(const SplitNeed& need, int split_s, int cycle_s) { return degree_of_saturation(need.ratio, cycle_s, split_s - need.lost_s); }

// The group that gets the next second: worst off first, then better off with it, then earlier in the ring.
std::size_t next_taker(const std::vector<SplitNeed>& list, const std::vector<int>& splits, int cycle_s) {
  std::size_t taker = 0;
  double now = -1, then = 0;
  for (std::size_t i = 0; i < list.size(); ++i) {
    if (list[i].ratio <= 0) continue;
    const double x = degree(list[i], splits[i], cycle_s), y = degree(list[i], splits[i] + 1, cycle_s);
    if (x > now || (x == now && y < then)) now = x, then = y, taker = i;
  }
  if (now >= 0) return taker;
  for (std::size_t i = 0; i < list.size(); ++i)
    if (list[i].takes_spare) return i;
  return list.size() - 1;
}

Vector degrees(const std::vector<SplitNeed>& list, const std::vector<int>& splits, int cycle_s) {
  Vector out;
  for (std::size_t i = 0; i < list.size(); ++i)
    if (list[i].ratio > 0) out.push_back(degree(list[i], splits[i], cycle_s));
  std::sort(out.begin(), out.end(), std::greater<>());
  return out;
}

struct SideTable {
  int least_s = 0;
  std::vector<std::vector<std::vector<int>>> splits;  // [length - least][ring][group]
  std::vector<Vector> saturation;                     // [length - least]
};

void add_ring(SideTable& side, const std::vector<SplitNeed>& list, int longest_s, int cycle_s) {
  std::vector<int> splits;
  for (const SplitNeed& need : list) splits.push_back(need.least_s);
  for (int length = sum_of(list); length <= longest_s; ++length) {
    if (length > sum_of(list) && !list.empty()) ++splits[next_taker(list, splits, cycle_s)];
    if (length < side.least_s) continue;
    const auto at = static_cast<std::size_t>(length - side.least_s);
    side.splits[at].push_back(splits);
    side.saturation[at] = merged(side.saturation[at], degrees(list, splits, cycle_s));
  }
}

SideTable side_table(const RingNeeds& needs, std::size_t side, int least_s, int longest_s, int cycle_s) {
  SideTable table;
  table.least_s = least_s;
  table.splits.resize(static_cast<std::size_t>(longest_s - least_s + 1));
  table.saturation.resize(table.splits.size());
  for (const auto& ring : needs) {
    if (ring[side].empty())
      for (auto& splits : table.splits) splits.emplace_back();
    else
      add_ring(table, ring[side], longest_s, cycle_s);
  }
  return table;
}

struct Partial {
  Vector saturation;
  int last_s = -1;  // length of the last side; -1: none fits
};

// Best way to fill `length` seconds with the sides so far and the next one.
Partial extend(const std::vector<Partial>& before, int least_before, const SideTable& side, int length, double wished_s) {
  Partial best;
  double best_miss = 0;
  for (int last = side.least_s; length - last >= least_before; ++last) {
    const auto& earlier = before[static_cast<std::size_t>(length - last)];
    Vector vector = merged(earlier.saturation, side.saturation[static_cast<std::size_t>(last - side.least_s)]);
    const double miss = std::abs(last - wished_s);
    const bool better = best.last_s < 0 || vector < best.saturation || (vector == best.saturation && miss < best_miss - 1e-9);
    if (better) best = {std::move(vector), last}, best_miss = miss;
  }
  return best;
}

}  // namespace

std::vector<int> least_sides_s(const RingNeeds& needs) {
  std::vector<int> least(needs.empty() ? 0 : needs.front().size(), 0);
  for (const auto& ring : needs)
    for (std::size_t side = 0; side < ring.size(); ++side) least[side] = std::max(least[side], sum_of(ring[side]));
  return least;
}

std::optional<RingSplits> fair_splits(const RingNeeds& needs, int cycle_s) {
  const std::vector<int> least = least_sides_s(needs);
  int total = 0;
  for (const int side : least) total += side;
  if (least.empty() || total > cycle_s) return std::nullopt;
  const int spare = cycle_s - total;

  std::vector<SideTable> sides;
  std::vector<std::vector<Partial>> stages;  // [side][length filled]
  int filled_least = 0;
  for (std::size_t s = 0; s < least.size(); ++s) {
    sides.push_back(side_table(needs, s, least[s], least[s] + spare, cycle_s));
    stages.emplace_back(static_cast<std::size_t>(cycle_s + 1));
    const bool last = s + 1 == least.size();
    const int from = last ? cycle_s : filled_least + least[s];
    for (int length = from; length <= filled_least + least[s] + spare; ++length) {
      auto& here = stages[s][static_cast<std::size_t>(length)];
      const double wished = length * static_cast<double>(least[s]) / std::max(1, filled_least + least[s]);
      here = s == 0 ? Partial{sides[0].saturation[static_cast<std::size_t>(length - least[0])], length}
                    : extend(stages[s - 1], filled_least, sides[s], length, wished);
    }
    filled_least += least[s];
  }

  RingSplits result;
  result.split_s.assign(needs.size(), std::vector<std::vector<int>>(least.size()));
  result.saturation_descending = stages.back()[static_cast<std::size_t>(cycle_s)].saturation;
  int length = cycle_s;
  for (std::size_t s = least.size(); s-- > 0;) {
    const int here = stages[s][static_cast<std::size_t>(length)].last_s;
    for (std::size_t r = 0; r < needs.size(); ++r) result.split_s[r][s] = sides[s].splits[static_cast<std::size_t>(here - least[s])][r];
    length -= here;
  }
  return result;
}

}  // namespace entrain::timing
