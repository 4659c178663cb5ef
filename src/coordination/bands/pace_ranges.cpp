#include "coordination/bands/pace_ranges.hpp"

#include <algorithm>
#include <cmath>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/polygon.hpp"
#include "coordination/bands/solve.hpp"

namespace entrain::bands {
namespace {

constexpr std::size_t most_polygons = 4000;
constexpr int halvings = 44;
constexpr double slack = 1e-8;  // seconds, where a path is traced back through rounded corners

// One pair of windows of a station, seconds.
struct PacePair {
  double c = 0, g = 0, h = 0;  // c: without travel
  bool open = false;
};

struct PaceStation {
  double period = 0;
  std::vector<PacePair> pairs;
};

// Everything scaled to y = sum of the two directions' paces, x = phi + c with travel but without the station's own
// windows.
class Reach {
 public:
  Reach(const PaceInput& input, const Compiled& compiled) : m_input(input), m_cycle(to_seconds(compiled.cycle)) {
    for (const CompiledStation& station : compiled.stations) m_stations.push_back(station_of(station));
  }

  // The largest share found to fit, with the paces that reach it; negative if none fits at 0.
  double best(std::vector<double>& paces) {
    const double w0 = m_input.corridor.forward_weight, w1 = m_input.corridor.backward_weight;
    if (!fits(0)) return -1;
    double low = 0, high = m_cycle / std::max(w0, w1);
    for (int i = 0; i < halvings; ++i) {
      const double middle = (low + high) / 2;
      if (fits(middle))
        low = middle;
      else
        high = middle;
    }
    fits(low);
    paces = trace();
    return low;
  }

 private:
  struct Strip {
    double from = 0, to = 0;
  };

  PaceStation station_of(const CompiledStation& station) const {
    PaceStation out{to_seconds(station.period), {}};
    for (const int o : station.options)
      for (const Slot& a : station.visits[0].slots[static_cast<std::size_t>(o)])
        for (const Slot& b : station.visits[1].slots[static_cast<std::size_t>(o)])
          out.pairs.push_back({to_seconds(wrap(b.start + b.duration - a.start, station.period)), to_seconds(a.duration),
                               to_seconds(b.duration), a.open || b.open});
    return out;
  }

  // Where x may lie in [from, to] for bands of this share; `everywhere` if it does not matter; false if no window is
  // long enough.
  bool strips(const PaceStation& station, double share, double from, double to, bool& everywhere,
              std::vector<Strip>& out) const {
    const double b = m_input.corridor.forward_weight * share, bb = m_input.corridor.backward_weight * share;
    everywhere = false;
    out.clear();
    bool any = false;
    for (const PacePair& pair : station.pairs) {
      if (pair.g < b || pair.h < bb) continue;
      any = true;
      const double room = pair.g + pair.h - b - bb;
      everywhere = everywhere || pair.open || room >= station.period;
      if (everywhere) continue;
      for (double start = std::floor((from - room + pair.c) / station.period) * station.period - pair.c; start <= to;
           start += station.period)
        if (start + room >= from) out.push_back({start, start + room});
    }
    std::sort(out.begin(), out.end(), [](const Strip& p, const Strip& q) { return p.from < q.from; });
    std::size_t kept = 0;
    for (const Strip& strip : out)
      if (kept > 0 && strip.from <= out[kept - 1].to)
        out[kept - 1].to = std::max(out[kept - 1].to, strip.to);
      else
        out[kept++] = strip;
    out.resize(kept);
    return any;
  }

  bool clip(std::vector<Polygon>& set, const PaceStation& station, double share) const {
    std::vector<Polygon> out;
    std::vector<Strip> allowed;
    for (const Polygon& polygon : set) {
      const auto [left, right] = std::minmax_element(polygon.begin(), polygon.end(),
                                                     [](const Corner& a, const Corner& b) { return a.x < b.x; });
      bool everywhere = false;
      if (!strips(station, share, left->x, right->x, everywhere, allowed)) return false;
      if (everywhere) {
        out.push_back(polygon);
        continue;
      }
      for (const Strip& strip : allowed) {
        Polygon part = cut(cut(polygon, -1, 0, -strip.from), 1, 0, strip.to);
        if (!part.empty()) out.push_back(std::move(part));
      }
    }
    set = std::move(out);
    return !set.empty();
  }

  double low_pace(std::size_t link) const { return 2 * m_input.links[link].least_s_per_m; }
  double high_pace(std::size_t link) const { return 2 * m_input.links[link].most_s_per_m; }

  // Back into one turn of the circle; drops what another polygon holds.
  void tidy(std::vector<Polygon>& set) const {
    for (Polygon& polygon : set) {
      double left = polygon.front().x;
      for (const Corner& c : polygon) left = std::min(left, c.x);
      polygon = moved(std::move(polygon), wrap(left, m_cycle) - left);
    }
    std::vector<Polygon> out;
    for (std::size_t i = 0; i < set.size(); ++i) {
      bool held = false;
      for (std::size_t j = 0; j < set.size() && !held; ++j)
        held = j != i && contains(set[j], set[i], 1e-12) && !(j > i && contains(set[i], set[j], 1e-12));
      if (!held) out.push_back(set[i]);
    }
    if (out.size() > most_polygons) out.resize(most_polygons);
    set = std::move(out);
  }

  // m_sets[i]: states (x at station i, pace sum of link i) that are reachable and fit up to station i.
  bool fits(double share) {
    m_sets.clear();
    std::vector<Polygon> set;
    const std::size_t links = m_input.links.size();
    if (links == 0) {
      set = {{{0, 0}, {m_cycle, 0}}};
      return clip(set, m_stations[0], share);
    }
    set = {hull({{0, low_pace(0)}, {m_cycle, low_pace(0)}, {0, high_pace(0)}, {m_cycle, high_pace(0)}})};
    if (!clip(set, m_stations[0], share)) return false;
    m_sets.push_back(set);
    for (std::size_t i = 0; i < links; ++i) {
      for (Polygon& polygon : set) polygon = sheared(std::move(polygon), m_input.links[i].length_m);
      if (!clip(set, m_stations[i + 1], share)) return false;
      if (i + 1 == links) break;
      for (Polygon& polygon : set)
        polygon = cut(cut(widened(polygon, 2 * m_input.most_change_s_per_m), 0, 1, high_pace(i + 1)), 0, -1,
                      -low_pace(i + 1));
      std::erase_if(set, [](const Polygon& p) { return p.empty(); });
      if (set.empty()) return false;
      tidy(set);
      m_sets.push_back(set);
    }
    m_last = set;
    return true;
  }

  // From the last station back: a pace of link i from which the state reached can have come.
  std::vector<double> trace() const {
    const std::size_t links = m_input.links.size();
    std::vector<double> paces(links, 0.0);
    if (links == 0) return paces;
    const Polygon& end = m_last.front();  // (x at the last station, pace of the last link)
    double x = 0, y = 0;
    for (const Corner& c : end) x += c.x / static_cast<double>(end.size()), y += c.y / static_cast<double>(end.size());
    paces[links - 1] = y / 2;
    for (std::size_t i = links - 1; i-- > 0;) {
      x -= m_input.links[i + 1].length_m * y;  // at station i + 1
      y = pace_before(i, x, y);
      paces[i] = y / 2;
    }
    return paces;
  }

  // A pace sum of link i with (x - length pace, pace) in the set of station i and within the change allowed from
  // `next`.
  double pace_before(std::size_t i, double& x, double next) const {
    const double length = m_input.links[i].length_m, change = 2 * m_input.most_change_s_per_m;
    double best = std::clamp(next, low_pace(i), high_pace(i)), best_miss = 1e300, best_at = x;
    for (const Polygon& polygon : m_sets[i]) {
      double low = 1e300, high = -1e300;  // of x' + length y over the polygon
      for (const Corner& c : polygon)
        low = std::min(low, c.x + length * c.y), high = std::max(high, c.x + length * c.y);
      for (double at = x + std::ceil((low - x - slack) / m_cycle) * m_cycle; at <= high + slack; at += m_cycle) {
        const Polygon part =
            cut(cut(cut(cut(polygon, 1, length, at + slack), -1, -length, -at + slack), 0, 1, next + change + 1e-12), 0,
                -1, -(next - change) + 1e-12);
        if (part.empty()) continue;
        double y = 0;
        for (const Corner& c : part) y += c.y / static_cast<double>(part.size());
        if (std::abs(y - next) < best_miss) best_miss = std::abs(y - next), best = y, best_at = at;
      }
    }
    x = best_at;
    return best;
  }

  const PaceInput& m_input;
  double m_cycle;
  std::vector<PaceStation> m_stations;
  std::vector<std::vector<Polygon>> m_sets;
  std::vector<Polygon> m_last;
};

PaceInput scaled(const PaceInput& input, double cycle_s) {
  PaceInput out = input;
  const double scale = cycle_s / input.corridor.cycle_s;
  out.corridor.cycle_s = cycle_s;
  for (TwoWayStation& station : out.corridor.stations)
    for (StationOption& option : station.options)
      for (auto* windows : {&option.forward, &option.backward})
        for (Window& window : *windows)
          window.start_s *= scale, window.duration_s = std::min(cycle_s, window.duration_s * scale);
  return out;
}

TwoWayInput with_travel(const PaceInput& input, const std::vector<double>& paces) {
  TwoWayInput corridor = input.corridor;
  corridor.forward_travel_s.clear();
  for (std::size_t i = 0; i < input.links.size(); ++i)
    corridor.forward_travel_s.push_back(paces[i] * input.links[i].length_m);
  corridor.backward_travel_s = corridor.forward_travel_s;
  for (TwoWayStation& station : corridor.stations) station.fixed_offset_s.reset();
  return corridor;
}

Diagnostics check_paces(const PaceInput& input) {
  Diagnostics found;
  const std::size_t links = input.corridor.stations.empty() ? 0 : input.corridor.stations.size() - 1;
  if (input.links.size() != links)
    found.push_back(error("links", std::to_string(input.links.size()),
                          std::to_string(links) + ", one between each two stations",
                          "Give every link its length and paces."));
  for (std::size_t i = 0; i < input.links.size(); ++i) {
    const PaceLink& link = input.links[i];
    const bool sound = link.length_m >= 0 && link.length_m <= 1e6 && link.least_s_per_m >= 0 &&
                       link.most_s_per_m >= link.least_s_per_m && link.most_s_per_m <= 1e3;
    if (!sound)
      found.push_back(error("link " + std::to_string(i), "length or paces out of range",
                            "length 0 to 1000000 m, 0 <= least pace <= most pace <= 1000 s/m", "Correct the link."));
  }
  if (!(input.most_change_s_per_m >= 0))
    found.push_back(
        error("change of pace", "negative or not a number", "0 or more", "Give the largest change in s/m."));
  if (input.corridor.one_way || !(input.corridor.forward_weight > 0) || !(input.corridor.backward_weight > 0))
    found.push_back(error("weights", "a direction that does not count", "two directions with weights above 0",
                          "Use two-way corridors only."));
  if (found.empty()) append(found, check(to_problem(with_travel(input, std::vector<double>(links, 0.0)))));
  return found;
}

// Share at one cycle, and the paces.
double share_at(const PaceInput& input, double cycle_s, std::vector<double>& paces) {
  const PaceInput own = cycle_s == input.corridor.cycle_s ? input : scaled(input, cycle_s);
  const auto compiled = compile(to_problem(with_travel(own, std::vector<double>(own.links.size(), 0.0))));
  return compiled ? Reach(own, *compiled).best(paces) : -1;
}

Result<PaceAnswer> answer_at(const PaceInput& input, double cycle_s) {
  PaceAnswer answer{cycle_s, std::vector<double>(input.links.size(), 0.0), {}};
  for (std::size_t i = 0; i < input.links.size(); ++i)
    answer.pace_s_per_m[i] = (input.links[i].least_s_per_m + input.links[i].most_s_per_m) / 2;
  share_at(input, cycle_s, answer.pace_s_per_m);
  auto bands = solve_two_way(
      with_travel(cycle_s == input.corridor.cycle_s ? input : scaled(input, cycle_s), answer.pace_s_per_m));
  if (!bands) return failure(bands.error());
  answer.bands = std::move(*bands);
  return answer;
}

// The highest share / cycle between two cycles, on 1 / cycle, by golden section.
double refined(const PaceInput& input, double from_s, double to_s, double& best) {
  const double golden = (std::sqrt(5.0) - 1) / 2;
  std::vector<double> paces;
  const auto at = [&](double z) { return share_at(input, 1 / z, paces) * z; };
  double low = 1 / to_s, high = 1 / from_s;
  double a = high - golden * (high - low), b = low + golden * (high - low);
  double at_a = at(a), at_b = at(b);
  for (int i = 0; i < 50; ++i) {
    if (at_a < at_b)
      low = a, a = b, at_a = at_b, b = low + golden * (high - low), at_b = at(b);
    else
      high = b, b = a, at_b = at_a, a = high - golden * (high - low), at_a = at(a);
  }
  best = std::max(at_a, at_b);
  return 1 / (at_a > at_b ? a : b);
}

}  // namespace

Result<PaceAnswer> solve_pace_ranges(const PaceInput& input) {
  Diagnostics found = check_paces(input);
  if (!found.empty()) return failure(std::move(found));
  return answer_at(input, input.corridor.cycle_s);
}

Result<PaceAnswer> solve_pace_ranges(const PaceInput& input, const CycleSteps& steps) {
  Diagnostics found = check_paces(input);
  if (!(steps.from_s >= 0.001) || !(steps.to_s >= steps.from_s) || !(steps.to_s <= 100'000.0) || !(steps.step_s > 0) ||
      (steps.to_s - steps.from_s) / steps.step_s > 1e5)
    found.push_back(error("cycle range", "from, to, step", "0.001 <= from <= to, a step above 0, at most 100000 steps",
                          "Correct the range."));
  if (!found.empty()) return failure(std::move(found));
  std::vector<double> cycles, values, paces;
  for (int k = 0; steps.from_s + k * steps.step_s <= steps.to_s + 1e-9; ++k)
    cycles.push_back(std::min(steps.to_s, steps.from_s + k * steps.step_s));
  for (const double cycle : cycles) values.push_back(share_at(input, cycle, paces) / cycle);
  double best = -1, best_cycle = cycles.front();
  for (std::size_t i = 0; i < cycles.size(); ++i) {
    if (values[i] > best) best = values[i], best_cycle = cycles[i];
    const bool local = (i == 0 || values[i] >= values[i - 1]) && (i + 1 == cycles.size() || values[i] >= values[i + 1]);
    if (!local || cycles.size() < 2) continue;
    double value = 0;
    const double cycle = refined(input, cycles[i == 0 ? 0 : i - 1], cycles[std::min(i + 1, cycles.size() - 1)], value);
    if (value > best) best = value, best_cycle = cycle;
  }
  return answer_at(input, best_cycle);
}

}  // namespace entrain::bands
