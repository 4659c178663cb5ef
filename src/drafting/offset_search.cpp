#include "drafting/offset_search.hpp"

#include <algorithm>

#include "coordination/offsets/solve.hpp"
#include "drafting/offset_proof.hpp"

namespace entrain::drafting {
namespace {

offsets::Problem problem_of(const OffsetSearch& search) {
  offsets::Problem problem;
  problem.cycle = search.cycle;
  problem.nodes = static_cast<int>(search.start.size());
  for (std::size_t v = 0; v < search.fixed.size(); ++v)
    if (search.fixed[v]) problem.fixed.push_back({static_cast<int>(v), search.start[v]});
  for (const OffsetEdge& edge : search.edges) problem.edges.push_back({edge.from, edge.to, edge.costs});
  return problem;
}

}  // namespace

OffsetSearchAnswer search_offsets(const OffsetSearch& search, const CoordinateOptions& options) {
  static_assert(OffsetSearch::forbidden == offsets::forbidden);
  const offsets::Problem problem = problem_of(search);
  offsets::SolveOptions how;
  how.seed = options.seed;
  how.threads = options.threads;
  how.effort = options.effort;
  how.want_certificate = options.want_certificate;
  how.start = offsets::Assignment{search.start, {}};
  OffsetSearchAnswer out;
  out.labels = search.start;
  const auto answer = offsets::solve(problem, how);
  if (!answer || answer->status != offsets::Status::solved) return out;
  out.solved = true;
  out.labels = answer->assignment.labels;
  out.value = answer->value;
  out.bound = answer->bound;
  if (!options.want_certificate) return out;
  out.certificate = plan::write_certificate(written_certificate(*answer));
  out.problem = plan::write_offset_problem(written_problem(problem));
  return out;
}

}  // namespace entrain::drafting
