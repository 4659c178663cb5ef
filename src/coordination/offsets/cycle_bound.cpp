#include "coordination/offsets/cycle_bound.hpp"

#include <algorithm>

#include "coordination/offsets/rows.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

}  // namespace

CycleBound::CycleBound(const Core& core, std::vector<Walk> walks) : m_core(core), m_rest(core.tables), m_pool(core.node_costs), m_space(core.cycle) {
  m_has_orders = std::any_of(core.orders.begin(), core.orders.end(), [](int count) { return count > 1; });
  m_beliefs.resize(core.edges.size());
  for (const CoreEdge& edge : core.edges) m_alpha.emplace_back(at(core.orders[at(edge.from)] + core.orders[at(edge.to)]), 0);
  lay_out(std::move(walks));
}

void CycleBound::lay_out(std::vector<Walk> walks) {
  std::vector<int> seen(m_core.edges.size(), 0);
  std::size_t thetas = 0, longest = 0;
  for (const Walk& walk : walks) {
    std::vector<Member>& members = m_cycles.emplace_back();
    for (const WalkedEdge& step : walk) {
      members.push_back({step.edge, step.forward, thetas, 0, seen[at(step.edge)]++});
      thetas += at(m_core.rows(step.edge) * m_core.lanes);
    }
    longest = std::max(longest, walk.size());
  }
  for (auto& members : m_cycles)
    for (Member& member : members) member.rank_later = seen[at(member.edge)] - 1 - member.rank_earlier;
  m_theta.assign(thetas, 0);
  m_minimum.assign(m_cycles.size(), 0);
  m_walked.resize(longest);
  m_suffix.resize(longest);
}

void CycleBound::sweep(const std::function<bool()>& stop) {
  for (const bool forward : {true, false}) {
    pass(forward, stop);
    if (m_has_orders) balance_nodes(forward);
  }
}

void CycleBound::pass(bool forward, const std::function<bool()>& stop) {
  const std::size_t count = m_cycles.size();
  for (std::size_t i = 0; i < count; ++i) {
    if (stop && i % 256 == 255 && stop()) return;
    update(forward ? i : count - 1 - i, forward);
  }
}

// All that is left of the edge's cost, but for its minimum, goes to the cycle.
void CycleBound::take(const Member& member) {
  Lane* rest = &m_rest[m_core.edges[at(member.edge)].table];
  Lane least = lane_ceiling;
  for (int r = 0; r < rows(member); ++r) least = std::min(least, least_of(rest + r * m_core.lanes, m_core.cycle));
  for (int r = 0; r < rows(member); ++r) take_rest(&m_theta[member.theta] + r * m_core.lanes, rest + r * m_core.lanes, least, m_core.cycle);
}

// The cycle's share of the edge as it is walked.
void CycleBound::walk_table(const Member& member, Table& table) const {
  const CoreEdge& edge = m_core.edges[at(member.edge)];
  const int from = m_core.orders[at(edge.from)], to = m_core.orders[at(edge.to)], lanes = m_core.lanes;
  table.leave = member.forward ? from : to;
  table.reach = member.forward ? to : from;
  table.above = 0;
  table.lanes.resize(at(from * to * lanes));
  const Lane* theta = &m_theta[member.theta];
  if (member.forward) return void(std::copy(theta, theta + from * to * lanes, table.lanes.begin()));
  for (int p = 0; p < from; ++p)
    for (int q = 0; q < to; ++q) reverse_row(theta + (p * to + q) * lanes, m_core.cycle, &table.lanes[at((q * from + p) * lanes)]);
}

// out: first a, then b; its least entry is 0.
void CycleBound::product(const Table& a, const Table& b, Table& out) {
  const int lanes = m_core.lanes, cycle = m_core.cycle;
  out.leave = a.leave;
  out.reach = b.reach;
  out.lanes.assign(at(a.leave * b.reach * lanes), Lane{1} << 30);
  Lane least = Lane{1} << 30;
  for (int p = 0; p < a.leave; ++p)
    for (int r = 0; r < b.reach; ++r) {
      Lane* row = &out.lanes[at((p * b.reach + r) * lanes)];
      for (int q = 0; q < a.reach; ++q) convolve_into(&a.lanes[at((p * a.reach + q) * lanes)], &b.lanes[at((q * b.reach + r) * lanes)], cycle, row, m_space);
      least = std::min(least, least_of(row, cycle));
    }
  for (int row = 0; row < a.leave * b.reach; ++row) lower_by(&out.lanes[at(row * lanes)], least, cycle);
  out.above = a.above + b.above + least;
}

// m_others: the rest of the cycle, walked from the end of edge k round to its start.
void CycleBound::others_of(std::size_t k, std::size_t length) {
  if (k == 0) m_others = m_suffix[1];
  else if (k + 1 == length) m_others = m_prefix;
  else product(m_suffix[k + 1], m_prefix, m_others);
}

// Gives back to the edge a part of what its differences cost above the cycle's minimum, which is found on the way.
void CycleBound::settle(Member& member, const Table& others, int parts, std::int64_t& minimum) {
  const CoreEdge& edge = m_core.edges[at(member.edge)];
  const int from = m_core.orders[at(edge.from)], to = m_core.orders[at(edge.to)], lanes = m_core.lanes, cycle = m_core.cycle;
  m_marginal.resize(at(from * to * lanes));
  Lane least = INT32_MAX;
  for (int p = 0; p < from; ++p)
    for (int q = 0; q < to; ++q) {
      Lane* m = &m_marginal[at((p * to + q) * lanes)];
      const Lane* theta = &m_theta[member.theta] + (p * to + q) * lanes;
      if (member.forward) least = std::min(least, add_reversed(theta, &others.lanes[at((q * from + p) * lanes)], cycle, m));
      else {
        std::copy(theta, theta + cycle, m);
        add_shifted(&others.lanes[at((p * to + q) * lanes)], 0, cycle, m);
        least = std::min(least, least_of(m, cycle));
      }
    }
  minimum = others.above + least;
  Belief& belief = m_beliefs[at(member.edge)];
  belief.confidence = INT32_MAX;
  for (int row = 0; row < from * to; ++row) {
    Lane* m = &m_marginal[at(row * lanes)];
    for (int d = 0; d < cycle; ++d) {
      if (m[d] == least && belief.confidence == INT32_MAX) belief = {row / to, row % to, d, INT32_MAX - 1};
      else belief.confidence = std::min(belief.confidence, m[d] - least);
    }
    if (parts > 0) give_back(&m_theta[member.theta] + row * lanes, &m_rest[edge.table] + row * lanes, m, least, parts, cycle);
  }
}

void CycleBound::update(std::size_t cycle, bool forward) {
  std::vector<Member>& members = m_cycles[cycle];
  const std::size_t length = members.size();
  int later = 0, earlier = 0;
  std::size_t start = 0, run = 0;  // the edges that no later cycle holds go last: they need no marginals
  for (std::size_t k = 0; k < length; ++k) {
    take(members[k]);
    const bool ahead = (forward ? members[k].rank_later : members[k].rank_earlier) > 0, behind = (forward ? members[k].rank_earlier : members[k].rank_later) > 0;
    later += ahead;
    earlier += behind;
  }
  const auto ahead_at = [&](std::size_t k) { return (forward ? members[k % length].rank_later : members[k % length].rank_earlier) > 0; };
  for (std::size_t k = 0; k < length; ++k) {
    std::size_t quiet = 0;
    while (quiet < length && !ahead_at(k + length - 1 - quiet)) ++quiet;
    if (quiet > run) run = quiet, start = k;
  }
  const std::size_t marginals = std::max<std::size_t>(1, length - std::min(run, length));
  const auto member_at = [&](std::size_t k) -> Member& { return members[(start + k) % length]; };
  for (std::size_t k = 0; k < length; ++k) walk_table(member_at(k), m_walked[k]);
  m_suffix[length - 1] = m_walked[length - 1];
  for (std::size_t k = length - 1; k-- > 1;) product(m_walked[k], m_suffix[k + 1], m_suffix[k]);
  int parts = std::max(later, earlier);
  for (std::size_t k = 0; k < marginals; ++k) {
    if (k == 1) m_prefix = m_walked[0];
    else if (k > 1) product(m_prefix, m_walked[k - 1], m_swap), std::swap(m_prefix, m_swap);
    others_of(k, length);
    Member& member = member_at(k);
    const bool gives = ahead_at(start + k);
    settle(member, m_others, gives ? parts : 0, m_minimum[cycle]);
    if (gives) --parts;
    if (k + 1 < marginals) walk_table(member, m_walked[k]);
  }
}

// Costs of orders travel between the edges at a node: each edge takes what its nodes hold and leaves them a share of its min-marginals.
void CycleBound::balance_nodes(bool forward) {
  const int count = static_cast<int>(m_core.edges.size());
  for (int i = 0; i < count; ++i) balance_edge(forward ? i : count - 1 - i, forward);
}

void CycleBound::balance_edge(int e, bool forward) {
  const CoreEdge& edge = m_core.edges[at(e)];
  const int from = m_core.orders[at(edge.from)], to = m_core.orders[at(edge.to)];
  if (from == 1 && to == 1) return;
  for (const bool at_from : {true, false}) {
    const int node = at_from ? edge.from : edge.to, orders = at_from ? from : to;
    if (orders == 1) continue;
    std::vector<Lane>& pool = m_pool[at(node)];
    const Lane kept = *std::min_element(pool.begin(), pool.end());
    const auto rows_do = [&](int order, const auto& change) {
      for (int other = 0; other < (at_from ? to : from); ++other) {
        const int row = at_from ? order * to + other : other * to + order;
        Lane* rest = &m_rest[edge.table] + row * m_core.lanes;
        change(rest);
      }
    };
    for (int order = 0; order < orders; ++order) {
      const Lane moved = std::min<Lane>(pool[at(order)] - kept, Lane{1} << 26);
      Lane& alpha = m_alpha[at(e)][at(at_from ? order : from + order)];
      const Lane taken = std::min(moved, (Lane{1} << 27) - alpha);
      pool[at(order)] -= taken;
      alpha += taken;
      rows_do(order, [&](Lane* rest) { for (int d = 0; d < m_core.cycle; ++d) rest[d] = std::min(rest[d] + taken, lane_ceiling); });
    }
  }
  for (const bool at_from : {true, false}) {
    const int node = at_from ? edge.from : edge.to, orders = at_from ? from : to;
    if (orders == 1) continue;
    int ahead = 0, behind = 0;
    for (std::size_t i = m_core.first_incident[at(node)]; i < m_core.first_incident[at(node) + 1]; ++i) {
      const int other = m_core.incidents[i].edge;
      ahead += forward ? other > e : other < e;
      behind += forward ? other < e : other > e;
    }
    const int parts = std::max(1, std::max(ahead, behind) + (at_from && to > 1 ? 1 : 0));
    std::vector<Lane> least(at(orders), lane_ceiling);
    for (int row = 0; row < from * to; ++row) {
      Lane& l = least[at(at_from ? row / to : row % to)];
      l = std::min(l, least_of(&m_rest[edge.table] + row * m_core.lanes, m_core.cycle));
    }
    const Lane lowest = *std::min_element(least.begin(), least.end());
    for (int order = 0; order < orders; ++order) {
      Lane& alpha = m_alpha[at(e)][at(at_from ? order : from + order)];
      const Lane given = std::min<Lane>((least[at(order)] - lowest) / parts, alpha + (Lane{1} << 27));
      m_pool[at(node)][at(order)] += given;
      alpha -= given;
      for (int row = 0; row < from * to; ++row)
        if ((at_from ? row / to : row % to) == order)
          for (int d = 0; d < m_core.cycle; ++d) m_rest[edge.table + at(row * m_core.lanes + d)] -= given;
    }
  }
}

std::int64_t CycleBound::bound() const {
  std::int64_t sum = 0;
  for (const std::int64_t minimum : m_minimum) sum += minimum;
  for (std::size_t e = 0; e < m_core.edges.size(); ++e) {
    Lane least = INT32_MAX;
    for (int row = 0; row < m_core.rows(static_cast<int>(e)); ++row) least = std::min(least, least_of(&m_rest[m_core.edges[e].table] + row * m_core.lanes, m_core.cycle));
    sum += least;
  }
  for (const auto& pool : m_pool) sum += *std::min_element(pool.begin(), pool.end());
  return sum;
}

void CycleBound::add_to(Certificate& certificate) const {
  certificate.scale = m_core.scale_up;
  for (std::size_t e = 0; e < m_alpha.size(); ++e) {
    const int from = m_core.orders[at(m_core.edges[e].from)];
    for (const bool at_from : {true, false}) {
      std::vector<std::int64_t> values(m_alpha[e].begin() + (at_from ? 0 : from), at_from ? m_alpha[e].begin() + from : m_alpha[e].end());
      for (std::int64_t& value : values) value *= m_core.scale_down;
      if (std::any_of(values.begin(), values.end(), [](std::int64_t v) { return v != 0; })) certificate.alphas.push_back({m_core.edges[e].id, at_from, std::move(values)});
    }
  }
  for (const auto& members : m_cycles) {
    CertificateCycle& cycle = certificate.cycles.emplace_back();
    for (const Member& member : members) {
      cycle.walk.push_back({m_core.edges[at(member.edge)].id, member.forward});
      Costs& theta = cycle.thetas.emplace_back();
      for (int row = 0; row < rows(member); ++row)
        for (int d = 0; d < m_core.cycle; ++d) theta.push_back(std::int64_t{m_theta[member.theta + at(row * m_core.lanes + d)]} * m_core.scale_down);
    }
  }
}

}  // namespace entrain::offsets
