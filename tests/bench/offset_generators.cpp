#include "offset_generators.hpp"

#include <algorithm>
#include <cmath>
#include <tuple>

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

double uniform(Random& random, double least, double most) { return least + (most - least) * static_cast<double>(random.below(1 << 30)) / (1 << 30); }

// Arrivals a second at the stop line: steady inflow and a platoon released over the upstream green, dispersed geometrically.
std::vector<double> arrivals(int cycle, double green, double travel, double platoon, double steady, double smooth) {
  std::vector<double> flow(at(cycle), steady);
  for (int t = 0; t < static_cast<int>(green); ++t) flow[at(t)] += platoon * (t < green / 2 ? 1.6 : 0.4);
  std::vector<double> spread(at(cycle), 0);
  double carried = 0;
  for (int turn = 0; turn < 6; ++turn)
    for (int t = 0; t < cycle; ++t) {
      carried += smooth * (flow[at(t)] - carried);
      spread[at((t + static_cast<int>(travel)) % cycle)] = carried;
    }
  return spread;
}

// Vehicle seconds of queueing a cycle for each start of green: two turns of a plain queue, the second one counted.
std::vector<double> delays(int cycle, const std::vector<double>& flow, double green) {
  std::vector<double> by_start(at(cycle));
  double volume = 0;
  for (const double f : flow) volume += f;
  const double discharge = std::max(0.5, volume / (0.9 * green));
  for (int start = 0; start < cycle; ++start) {
    double queue = 0, delay = 0;
    for (int t = 0; t < 2 * cycle; ++t) {
      const int in_green = (t - start % cycle + cycle) % cycle;
      queue = std::max(0.0, queue + flow[at(t % cycle)] - (in_green < green ? discharge : 0));
      if (t >= cycle) delay += queue;
    }
    by_start[at(start)] = delay / cycle;
  }
  return by_start;
}

Costs costs_of(int cycle, CostKind kind, bool both, Random& random) {
  Costs costs(at(cycle), 0);
  if (kind == CostKind::noise) {
    for (std::int64_t& c : costs) c = random.below(10'000);
    return costs;
  }
  const Costs forward = platoon_costs(cycle, random, kind == CostKind::steady), backward = platoon_costs(cycle, random, kind == CostKind::steady);
  for (int d = 0; d < cycle; ++d) costs[at(d)] = forward[at(d)] + (both ? backward[at((cycle - d) % cycle)] : 0);
  return costs;
}

struct Point {
  double x = 0, y = 0;
};

double cross(const Point& a, const Point& b, const Point& c) { return (b.x - a.x) * (c.y - a.y) - (b.y - a.y) * (c.x - a.x); }
bool crossing(const Point& a, const Point& b, const Point& c, const Point& d) { return cross(a, b, c) * cross(a, b, d) < 0 && cross(c, d, a) * cross(c, d, b) < 0; }

struct Street {
  double length = 0;
  int from = 0, to = 0;
};

// Streets between near points, the shortest first, none crossing another: buckets of one unit keep it near linear.
std::vector<Street> streets_between(const std::vector<Point>& points, int side) {
  std::vector<std::vector<int>> bucket(at(side * side));
  const auto cell = [&](const Point& p) { return std::min(side - 1, static_cast<int>(p.y)) * side + std::min(side - 1, static_cast<int>(p.x)); };
  for (std::size_t i = 0; i < points.size(); ++i) bucket[at(cell(points[i]))].push_back(static_cast<int>(i));
  const auto near = [&](const Point& p, int reach, const auto& visit) {
    for (int y = std::max(0, static_cast<int>(p.y) - reach); y <= std::min(side - 1, static_cast<int>(p.y) + reach); ++y)
      for (int x = std::max(0, static_cast<int>(p.x) - reach); x <= std::min(side - 1, static_cast<int>(p.x) + reach); ++x)
        for (const int i : bucket[at(y * side + x)]) visit(i);
  };
  std::vector<Street> candidates;
  for (int i = 0; i < static_cast<int>(points.size()); ++i)
    near(points[at(i)], 2, [&](int j) {
      if (j > i) candidates.push_back({std::hypot(points[at(i)].x - points[at(j)].x, points[at(i)].y - points[at(j)].y), i, j});
    });
  std::sort(candidates.begin(), candidates.end(), [](const Street& a, const Street& b) { return std::tie(a.length, a.from, a.to) < std::tie(b.length, b.from, b.to); });
  std::vector<std::vector<int>> streets_at(points.size());
  std::vector<Street> built;
  for (const Street& s : candidates) {
    bool free = true;
    near(points[at(s.from)], 4, [&](int i) {
      for (const int b : streets_at[at(i)]) free = free && !crossing(points[at(s.from)], points[at(s.to)], points[at(built[at(b)].from)], points[at(built[at(b)].to)]);
    });
    if (!free) continue;
    streets_at[at(s.from)].push_back(static_cast<int>(built.size()));
    streets_at[at(s.to)].push_back(static_cast<int>(built.size()));
    built.push_back(s);
  }
  return built;
}

}  // namespace

Costs platoon_costs(int cycle, Random& random, bool steady) {
  const double green = uniform(random, 0.35, 0.6) * cycle, up_green = uniform(random, 0.3, 0.55) * cycle, travel = uniform(random, 8, 60);
  const double volume = uniform(random, 0.15, 0.8) * 0.5 * green, share = steady ? uniform(random, 0.3, 0.6) : uniform(random, 0.05, 0.25);
  const auto flow = arrivals(cycle, up_green, travel, (1 - share) * volume / up_green, share * volume / cycle, steady ? 0.08 : 0.2);
  const auto delay = delays(cycle, flow, green);
  Costs costs(at(cycle));
  for (int d = 0; d < cycle; ++d) costs[at(d)] = std::llround(1000 * delay[at(d)]);
  return costs;
}

Problem grid_problem(int rows, int columns, int cycle, CostKind kind, std::uint64_t seed) {
  Random random(seed);
  Problem problem;
  problem.cycle = cycle;
  problem.nodes = rows * columns;
  for (int y = 0; y < rows; ++y)
    for (int x = 0; x < columns; ++x) {
      const int v = y * columns + x;
      if (x + 1 < columns) problem.edges.push_back({v, v + 1, costs_of(cycle, kind, true, random)});
      if (y + 1 < rows) problem.edges.push_back({v, v + columns, costs_of(cycle, kind, true, random)});
    }
  return problem;
}

Problem town_problem(int nodes, int cycle, CostKind kind, double degree, std::uint64_t seed) {
  Random random(seed);
  const int side = std::max(1, static_cast<int>(std::lround(std::sqrt(nodes))));
  std::vector<Point> points;
  for (int i = 0; i < nodes; ++i) points.push_back({uniform(random, 0, side), uniform(random, 0, side)});
  Problem problem;
  problem.cycle = cycle;
  problem.nodes = nodes;
  std::vector<int> part(at(nodes));
  for (int i = 0; i < nodes; ++i) part[at(i)] = i;
  const auto root = [&](int v) {
    while (part[at(v)] != v) v = part[at(v)] = part[at(part[at(v)])];
    return v;
  };
  std::size_t extra = static_cast<std::size_t>(std::max(0.0, (degree / 2 - 1) * nodes));
  for (const Street& s : streets_between(points, side)) {
    const bool needed = root(s.from) != root(s.to);
    if (!needed && (extra == 0 || random.chance(0.3))) continue;
    if (needed) part[at(root(s.from))] = root(s.to);
    else --extra;
    problem.edges.push_back({s.from, s.to, costs_of(cycle, kind, !random.chance(0.2), random)});
  }
  return problem;
}

Problem any_problem(int nodes, int edges, int cycle, int orders, double forbidding, std::int64_t largest, std::uint64_t seed) {
  Random random(seed);
  Problem problem;
  problem.cycle = cycle;
  problem.nodes = nodes;
  if (orders > 1)
    for (int v = 0; v < nodes; ++v) {
      problem.orders.push_back(1 + random.below(orders));
      Costs& costs = problem.node_costs.emplace_back();
      for (int p = 0; p < problem.orders.back(); ++p) costs.push_back(static_cast<std::int64_t>(random.next() % static_cast<std::uint64_t>(largest + 1)) - largest / 2);
    }
  for (int e = 0; e < edges && nodes > 1; ++e) {
    Edge edge;
    edge.from = random.below(nodes);
    edge.to = (edge.from + 1 + random.below(nodes - 1)) % nodes;
    edge.costs.resize(at(orders_of(problem, edge.from) * orders_of(problem, edge.to) * cycle));
    for (std::int64_t& c : edge.costs) {
      c = static_cast<std::int64_t>(random.next() % static_cast<std::uint64_t>(largest + 1)) - largest / 3;
      if (random.chance(forbidding)) c = forbidden;
    }
    problem.edges.push_back(std::move(edge));
  }
  return problem;
}

}  // namespace entrain::offsets
