#include "review/certificate_check.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <map>
#include <set>

#include "review/certificate_steps.hpp"

namespace entrain::review {
namespace {

using plan::Certificate;
using plan::CertificateCycle;
using plan::OffsetProblem;
using plan::WalkedEdge;

// What one walked edge of a cycle costs by orders of the node it leaves and the node it reaches and by difference in that direction.
struct WalkTable {
  int leave = 1, reach = 1;
  Entries costs;
};

// The theta of one walked edge, excluded where the edge is; mirrored where it is walked against its direction.
WalkTable walk_table(const Reduced& reduced, const WalkedEdge& walked, const Entries& theta) {
  const LiveEdge& edge = reduced.edges[static_cast<std::size_t>(walked.edge)];
  const int from = reduced.orders[static_cast<std::size_t>(edge.from)], to = reduced.orders[static_cast<std::size_t>(edge.to)], cycle = reduced.cycle;
  WalkTable table{walked.forward ? from : to, walked.forward ? to : from, Entries(edge.costs.size(), excluded)};
  for (int p = 0; p < from; ++p)
    for (int q = 0; q < to; ++q)
      for (int d = 0; d < cycle; ++d) {
        const std::size_t here = entry(p, q, to, d, cycle);
        const std::size_t there = walked.forward ? here : entry(q, p, from, (cycle - d) % cycle, cycle);
        if (edge.costs[here] != excluded) table.costs[there] = theta[here];
      }
  return table;
}

// The best of first walking a, then b, for every total difference.
WalkTable walk_both(const WalkTable& a, const WalkTable& b, int cycle) {
  WalkTable both{a.leave, b.reach, Entries(static_cast<std::size_t>(a.leave) * b.reach * cycle, excluded)};
  for (int p = 0; p < a.leave; ++p)
    for (int r = 0; r < b.reach; ++r)
      for (int q = 0; q < a.reach; ++q)
        add_best_sums(&a.costs[entry(p, q, a.reach, 0, cycle)], &b.costs[entry(q, r, b.reach, 0, cycle)], cycle, &both.costs[entry(p, r, b.reach, 0, cycle)]);
  return both;
}

// The least cost of walking a and then b back to the start.
std::int64_t least_round(const WalkTable& a, const WalkTable& b, int cycle) {
  std::int64_t least = excluded;
  for (int p = 0; p < a.leave; ++p)
    for (int q = 0; q < a.reach; ++q)
      for (int d = 0; d < cycle; ++d) {
        const std::int64_t out = a.costs[entry(p, q, a.reach, d, cycle)], back = b.costs[entry(q, p, a.leave, (cycle - d) % cycle, cycle)];
        if (out != excluded && back != excluded) least = std::min(least, out + back);
      }
  return least;
}

std::int64_t cycle_minimum(const Reduced& reduced, const CertificateCycle& cycle) {
  WalkTable walked = walk_table(reduced, cycle.walk[0], cycle.thetas[0]);
  for (std::size_t k = 1; k + 1 < cycle.walk.size(); ++k) walked = walk_both(walked, walk_table(reduced, cycle.walk[k], cycle.thetas[k]), reduced.cycle);
  return least_round(walked, walk_table(reduced, cycle.walk.back(), cycle.thetas.back()), reduced.cycle);
}

// Everything that is not a simple cycle of remaining edges with tables of the right size and magnitude; empty if all is well.
std::string fault_of_cycle(const Reduced& reduced, const CertificateCycle& cycle) {
  if (cycle.walk.size() < 2) return "fewer than two edges";
  std::set<int> nodes, edges;
  int at = -1, start = -1;
  std::int64_t magnitude = 0;
  for (std::size_t k = 0; k < cycle.walk.size(); ++k) {
    const WalkedEdge& walked = cycle.walk[k];
    if (walked.edge >= static_cast<int>(reduced.edges.size()) || !reduced.edges[static_cast<std::size_t>(walked.edge)].alive)
      return fmt::format("edge {}, which does not remain", walked.edge);
    const LiveEdge& edge = reduced.edges[static_cast<std::size_t>(walked.edge)];
    const int leave = walked.forward ? edge.from : edge.to, reach = walked.forward ? edge.to : edge.from;
    if (k == 0) start = leave;
    else if (leave != at) return fmt::format("edge {}, which does not start at node {}", walked.edge, at);
    at = reach;
    if (!nodes.insert(reach).second || !edges.insert(walked.edge).second) return fmt::format("node {} twice", reach);
    if (cycle.thetas[k].size() != edge.costs.size()) return fmt::format("a theta of {} entries for edge {}", cycle.thetas[k].size(), walked.edge);
    std::int64_t largest = 0;
    for (const std::int64_t value : cycle.thetas[k]) {
      if (value > largest_magnitude || value < -largest_magnitude) return "entries too large for whole numbers of 64 bits";
      largest = std::max(largest, value < 0 ? -value : value);
    }
    if (!add_checked(magnitude, largest) || magnitude > largest_magnitude) return "entries too large for whole numbers of 64 bits";
  }
  return at == start ? "" : "an open walk";
}

class Checker {
 public:
  Checker(const OffsetProblem& problem, const Certificate& certificate, const std::string& source)
      : m_problem(problem), m_certificate(certificate), m_source(source) {}

  CertificateReview check() {
    check_answer();
    if (auto reduced = reduce(m_problem, m_certificate, m_source)) {
      m_reduced = std::move(*reduced);
      evaluate_bound();
    } else {
      append(m_review.findings, reduced.error());
    }
    judge_claims();
    m_review.accepted = m_review.findings.empty();
    return std::move(m_review);
  }

 private:
  void find(std::string found, std::string expected) {
    m_review.findings.push_back(error(m_source, std::move(found), std::move(expected), "The certificate proves nothing of the kind: make a new one"));
  }

  bool add(std::int64_t term) {
    if (add_checked(m_total, term) && m_total <= largest_magnitude && m_total >= -largest_magnitude) return true;
    find("terms too large for whole numbers of 64 bits", "a smaller scale");
    return false;
  }

  void evaluate_bound() {
    m_total = m_reduced.constant;
    if (m_reduced.infeasible || !add_cycles()) {
      m_review.proves_infeasible = m_reduced.infeasible;
      return;
    }
    if (!take_alphas() || !add_edges() || !add_nodes()) return;
    const std::int64_t scale = m_certificate.scale;
    m_review.bound = m_total >= 0 ? (m_total + scale - 1) / scale : -(-m_total / scale);
  }

  bool add_cycles() {
    for (std::size_t c = 0; c < m_certificate.cycles.size(); ++c) {
      const CertificateCycle& cycle = m_certificate.cycles[c];
      const std::string fault = cycle.thetas.size() == cycle.walk.size() ? fault_of_cycle(m_reduced, cycle) : "not one theta for each edge";
      if (!fault.empty()) return find(fmt::format("cycle {} has {}", c + 1, fault), "a simple closed walk of remaining edges with full tables"), false;
      const std::int64_t least = cycle_minimum(m_reduced, cycle);
      if (least == excluded) return m_reduced.infeasible = true, false;
      if (!add(least) || !take_thetas(cycle)) return false;
    }
    return true;
  }

  // From here on the edges' costs are what the thetas and alphas leave of them.
  bool take_thetas(const CertificateCycle& cycle) {
    for (std::size_t k = 0; k < cycle.walk.size(); ++k) {
      Entries& costs = m_taken.try_emplace(cycle.walk[k].edge, m_reduced.edges[static_cast<std::size_t>(cycle.walk[k].edge)].costs.size(), 0).first->second;
      for (std::size_t i = 0; i < costs.size(); ++i)
        if (!add_checked(costs[i], cycle.thetas[k][i])) return find("thetas too large for whole numbers of 64 bits", "a smaller scale"), false;
    }
    return true;
  }

  bool take_alphas() {
    for (const plan::CertificateAlpha& alpha : m_certificate.alphas) {
      if (alpha.edge >= static_cast<int>(m_reduced.edges.size()) || !m_reduced.edges[static_cast<std::size_t>(alpha.edge)].alive)
        return find(fmt::format("an alpha of edge {}, which does not remain", alpha.edge), "an edge that remains"), false;
      LiveEdge& edge = m_reduced.edges[static_cast<std::size_t>(alpha.edge)];
      Entries& node = m_reduced.node_costs[static_cast<std::size_t>(alpha.at_from ? edge.from : edge.to)];
      if (alpha.values.size() != node.size()) return find(fmt::format("{} alphas for edge {}", alpha.values.size(), alpha.edge), fmt::format("{}", node.size())), false;
      if (!move_alpha(alpha, edge, node)) return find("alphas too large for whole numbers of 64 bits", "a smaller scale"), false;
    }
    return true;
  }

  bool move_alpha(const plan::CertificateAlpha& alpha, LiveEdge& edge, Entries& node) {
    const int to = m_reduced.orders[static_cast<std::size_t>(edge.to)], cycle = m_reduced.cycle;
    for (const std::int64_t value : alpha.values)
      if (value > largest_magnitude || value < -largest_magnitude) return false;
    for (std::size_t i = 0; i < edge.costs.size(); ++i) {
      const int pair = static_cast<int>(i) / cycle;
      const auto order = static_cast<std::size_t>(alpha.at_from ? pair / to : pair % to);
      if (edge.costs[i] != excluded && (!add_checked(edge.costs[i], alpha.values[order]) || edge.costs[i] >= excluded)) return false;
    }
    for (std::size_t order = 0; order < node.size(); ++order)
      if (node[order] != excluded && (!add_checked(node[order], -alpha.values[order]) || node[order] >= excluded)) return false;
    return true;
  }

  bool add_edges() {
    for (std::size_t e = 0; e < m_reduced.edges.size(); ++e) {
      if (!m_reduced.edges[e].alive) continue;
      const auto taken = m_taken.find(static_cast<int>(e));
      std::int64_t least = excluded;
      for (std::size_t i = 0; i < m_reduced.edges[e].costs.size(); ++i) {
        std::int64_t left = m_reduced.edges[e].costs[i];
        if (left == excluded) continue;
        if (taken != m_taken.end() && !add_checked(left, -taken->second[i])) return find("thetas too large for whole numbers of 64 bits", "a smaller scale"), false;
        least = std::min(least, left);
      }
      if (least == excluded) return m_review.proves_infeasible = true, false;
      if (!add(least)) return false;
    }
    return true;
  }

  bool add_nodes() {
    for (std::size_t v = 0; v < m_reduced.node_costs.size(); ++v) {
      if (!m_reduced.present[v]) continue;
      const std::int64_t least = *std::min_element(m_reduced.node_costs[v].begin(), m_reduced.node_costs[v].end());
      if (least == excluded) return m_review.proves_infeasible = true, false;
      if (!add(least)) return false;
    }
    return true;
  }

  void check_answer() {
    if (m_certificate.offsets.empty()) return;
    std::string fault;
    m_review.value = cost_of(m_problem, m_certificate.offsets, m_certificate.orders, fault);
    if (!m_review.value) find("an answer with " + fault, "one admissible label for each node");
    else if (m_certificate.value != m_review.value)
      find(m_certificate.value ? fmt::format("a value of {}", *m_certificate.value) : "an answer without a value", fmt::format("{}, what the answer costs", *m_review.value));
  }

  void judge_claims() {
    if (m_certificate.infeasible) {
      if (!m_review.proves_infeasible) find("a claim that nothing is admissible", "steps or a cycle that show it");
      return;
    }
    if (m_review.bound && m_certificate.bound > *m_review.bound)
      find(fmt::format("a claimed bound of {}", m_certificate.bound), fmt::format("at most {}, which is what it proves", *m_review.bound));
    m_review.proves_optimal = m_review.bound && m_review.value && *m_review.value == *m_review.bound;
  }

  const OffsetProblem& m_problem;
  const Certificate& m_certificate;
  const std::string& m_source;
  Reduced m_reduced;
  std::map<int, Entries> m_taken;
  std::int64_t m_total = 0;
  CertificateReview m_review;
};

}  // namespace

CertificateReview check_certificate(const OffsetProblem& problem, const Certificate& certificate, const std::string& source) {
  return Checker(problem, certificate, source).check();
}

}  // namespace entrain::review
