// The best labels there are, or as near as the effort allows, with a lower bound and its proof.
//
// Exact reductions first (the combination rules of Hillier 1965 and Allsop 1968: parallel links add, dead ends are free, links in series
// combine by convolution). On what remains, a lower bound from cycles (dual decomposition over cycles, whole numbers throughout) and a
// search by exact dynamic programming over random forests of rigid clusters.
//
// The answer depends on the problem, the seed and the rounds that the stop condition allowed, never on the number of threads.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <vector>

#include "base/result.hpp"
#include "coordination/offsets/certificate.hpp"
#include "coordination/offsets/problem.hpp"

namespace entrain::offsets {

struct SolveOptions {
  std::uint64_t seed = 1;
  int threads = 1;
  // Seconds since the caller began, and how many there are; the engine itself reads no clock. Without one, a fixed effort is made.
  std::function<double()> elapsed_s;
  double time_limit_s = 0;
  // Scales the fixed effort that is made without a clock.
  double effort = 1;
  // An assignment to start from, by node: the answer is never worse. Not admissible or of the wrong size: only a hint or ignored.
  std::optional<Assignment> start;
  bool want_certificate = true;
};

enum class Status {
  solved,         // an admissible assignment; value and bound hold
  infeasible,     // proved: the edges in `conflict` admit no assignment
  none_found,     // no admissible assignment was found, and it is not proved that there is none; bound holds
};

struct Answer {
  Status status = Status::solved;
  Assignment assignment;        // the first node of each connected part has label 0 unless labels are fixed; orders always given
  std::int64_t value = 0;       // cost(problem, assignment)
  std::int64_t bound = 0;       // no assignment costs less
  bool proved = false;          // value == bound
  std::vector<int> conflict;    // infeasible: edges that together admit nothing (a cycle in walking order where they form one); indices
                                // from edges.size() on are fixed labels (fixed[1 + index - edges.size()])
  Certificate certificate;      // of the bound, or of infeasibility
  int core_nodes = 0;           // what was left after the reductions
  int core_edges = 0;
};

// Errors: faults(problem). A problem without edges, with several parts or a single label is fine.
[[nodiscard]] Result<Answer> solve(const Problem& problem, const SolveOptions& options = {});

}  // namespace entrain::offsets
