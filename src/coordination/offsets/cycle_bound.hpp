// The lower bound: the cost of every edge split among the cycles that hold it, raised by moving cost between cycles.
//
// A cycle takes what is left of its edges, finds for each edge what every difference costs at best round the cycle (its min-marginals), and
// leaves to the edges that later cycles hold what those differences cost above the cycle's minimum. The cycle's minimum stays, what is left
// only grows: the bound never falls (sequential reweighted message passing, Kolmogorov, IEEE TPAMI 37(5), 2015, with cycles as factors).
// Where nodes have orders, the costs of orders travel between edges that meet at a node in the same way.
#pragma once

#include <cstdint>
#include <functional>
#include <vector>

#include "coordination/offsets/core.hpp"
#include "coordination/offsets/cycles.hpp"

namespace entrain::offsets {

// What the cycles say about an edge: the difference they like best and by how much they like it better than any other.
struct Belief {
  int order_from = 0, order_to = 0, difference = 0;
  Lane confidence = 0;
};

class CycleBound {
 public:
  CycleBound(const Core& core, std::vector<Walk> walks);

  // Over all cycles, there and back. Ends early when `stop` says so: the bound still holds.
  void sweep(const std::function<bool()>& stop = {});
  // In work units above the core's base.
  std::int64_t bound() const;
  const std::vector<Belief>& beliefs() const { return m_beliefs; }
  // Cycles, thetas and alphas, with edges by the reduction's numbers, in units of 1 / scale_up.
  void add_to(Certificate& certificate) const;

 private:
  struct Member {
    int edge = 0;
    bool forward = true;
    std::size_t theta = 0;
    int rank_later = 0, rank_earlier = 0;  // cycles after and before this one that hold the edge
  };
  struct Table {
    int leave = 1, reach = 1;
    std::int64_t above = 0;  // subtracted from all entries
    std::vector<Lane> lanes;
  };

  void lay_out(std::vector<Walk> walks);
  void pass(bool forward, const std::function<bool()>& stop);
  void update(std::size_t cycle, bool forward);
  void take(const Member& member);
  void walk_table(const Member& member, Table& table) const;
  void product(const Table& a, const Table& b, Table& out);
  void others_of(std::size_t k, std::size_t length);
  void settle(Member& member, const Table& others, int parts, std::int64_t& minimum);
  void balance_nodes(bool forward);
  void balance_edge(int edge, bool forward);
  int rows(const Member& member) const { return m_core.rows(member.edge); }

  const Core& m_core;
  std::vector<std::vector<Member>> m_cycles;
  std::vector<std::int64_t> m_minimum;     // by cycle
  std::vector<Lane> m_theta, m_rest;       // rest: as core tables
  std::vector<std::vector<Lane>> m_pool;   // by node, by order: node costs less alphas
  std::vector<std::vector<Lane>> m_alpha;  // by edge: from orders, then to orders
  std::vector<Belief> m_beliefs;
  ConvolutionSpace m_space;
  std::vector<Table> m_walked, m_suffix;
  Table m_prefix, m_swap, m_others;
  std::vector<Lane> m_marginal;
  bool m_has_orders = false;
};

}  // namespace entrain::offsets
