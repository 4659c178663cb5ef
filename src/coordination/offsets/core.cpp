#include "coordination/offsets/core.hpp"

#include <algorithm>

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

struct Range {
  std::int64_t least = 0, most = 0;
};

Range range_of(const Costs& costs) {
  Range range{forbidden, 0};
  bool any = false;
  for (const std::int64_t c : costs) {
    if (c == forbidden) continue;
    range.most = any ? std::max(range.most, c) : c;
    range.least = std::min(range.least, c);
    any = true;
  }
  return any ? range : Range{};
}

// Work units: the ranges that matter (sixteen times the median range at most) take up 22 bits.
void choose_scale(Core& core, std::vector<std::int64_t> ranges) {
  ranges.erase(std::remove(ranges.begin(), ranges.end(), 0), ranges.end());
  if (ranges.empty()) return;
  std::sort(ranges.begin(), ranges.end());
  const std::int64_t range = std::min(ranges.back(), 16 * ranges[ranges.size() / 2]), room = std::int64_t{1} << 22;
  while (core.scale_up < (std::int64_t{1} << 20) && range * core.scale_up * 2 <= room) core.scale_up *= 2;
  while (range / core.scale_down > room) core.scale_down *= 2;
}

Lane work_units(const Core& core, std::int64_t cost, std::int64_t least) {
  if (cost == forbidden) return work_forbidden;
  const std::int64_t above = cost - least;
  if (above / core.scale_down >= work_clip) return work_clip;
  return static_cast<Lane>(std::min<std::int64_t>(work_clip, above * core.scale_up / core.scale_down));
}

void link_nodes(Core& core) {
  core.first_incident.assign(core.nodes.size() + 1, 0);
  for (const CoreEdge& edge : core.edges) ++core.first_incident[at(edge.from) + 1], ++core.first_incident[at(edge.to) + 1];
  for (std::size_t v = 0; v < core.nodes.size(); ++v) core.first_incident[v + 1] += core.first_incident[v];
  std::vector<std::size_t> next(core.first_incident.begin(), core.first_incident.end() - 1);
  core.incidents.resize(core.first_incident.back());
  for (std::size_t e = 0; e < core.edges.size(); ++e) {
    const CoreEdge& edge = core.edges[e];
    core.incidents[next[at(edge.from)]++] = {static_cast<int>(e), edge.to};
    core.incidents[next[at(edge.to)]++] = {static_cast<int>(e), edge.from};
  }
}

}  // namespace

Core core_of(const Reduction& r) {
  Core core;
  core.cycle = r.cycle;
  core.lanes = row_lanes(r.cycle);
  core.base = r.constant;
  std::vector<int> number(r.present.size(), -1);
  for (std::size_t v = 0; v < r.present.size(); ++v) {
    if (!r.present[v]) continue;
    number[v] = static_cast<int>(core.nodes.size());
    core.nodes.push_back(static_cast<int>(v));
    core.orders.push_back(r.orders[v]);
  }
  std::vector<std::int64_t> ranges;
  std::size_t lanes = 0;
  for (std::size_t e = 0; e < r.edges.size(); ++e) {
    const ReducedEdge& edge = r.edges[e];
    if (!edge.alive) continue;
    core.edges.push_back({number[at(edge.from)], number[at(edge.to)], static_cast<int>(e), lanes});
    lanes += edge.costs.size() / at(r.cycle) * at(core.lanes);
    const Range range = range_of(edge.costs);
    core.base += range.least;
    ranges.push_back(range.most - range.least);
  }
  for (const int v : core.nodes) {
    const Range range = range_of(r.node_costs[at(v)]);
    core.base += range.least;
    ranges.push_back(range.most - range.least);
  }
  choose_scale(core, std::move(ranges));
  core.tables.assign(lanes, 0);
  for (const CoreEdge& edge : core.edges) {
    const Costs& costs = r.edges[at(edge.id)].costs;
    const std::int64_t least = range_of(costs).least;
    for (std::size_t i = 0; i < costs.size(); ++i)
      core.tables[edge.table + i / at(r.cycle) * at(core.lanes) + i % at(r.cycle)] = work_units(core, costs[i], least);
  }
  for (const int v : core.nodes) {
    const Costs& costs = r.node_costs[at(v)];
    const std::int64_t least = range_of(costs).least;
    std::vector<Lane>& row = core.node_costs.emplace_back();
    for (const std::int64_t c : costs) row.push_back(work_units(core, c, least));
  }
  link_nodes(core);
  return core;
}

std::int64_t whole_bound(const Core& core, std::int64_t work) {
  std::int64_t scaled = 0;
  if (__builtin_mul_overflow(work, core.scale_down, &scaled)) scaled = INT64_MAX / 4;
  const std::int64_t up = core.scale_up;
  return core.base + (scaled >= 0 ? scaled / up + (scaled % up != 0 ? 1 : 0) : -(-scaled / up));
}

}  // namespace entrain::offsets
