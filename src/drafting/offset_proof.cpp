#include "drafting/offset_proof.hpp"

namespace entrain::drafting {
namespace {

plan::StepKind written(offsets::StepKind kind) {
  switch (kind) {
    case offsets::StepKind::merge: return plan::StepKind::merge;
    case offsets::StepKind::end: return plan::StepKind::end;
    case offsets::StepKind::chain: return plan::StepKind::chain;
    case offsets::StepKind::same: break;
  }
  return plan::StepKind::same;
}

plan::CertificateCycle written(const offsets::CertificateCycle& cycle) {
  plan::CertificateCycle out;
  for (const offsets::WalkedEdge& step : cycle.walk) out.walk.push_back({step.edge, step.forward});
  out.thetas = cycle.thetas;
  return out;
}

}  // namespace

plan::OffsetProblem written_problem(const offsets::Problem& problem) {
  static_assert(plan::forbidden_cost == offsets::forbidden);
  plan::OffsetProblem out{problem.cycle, problem.nodes, problem.orders, problem.node_costs, {}, {}};
  for (const offsets::FixedLabel& fixed : problem.fixed) out.fixed.push_back({fixed.node, fixed.label});
  for (const offsets::Edge& edge : problem.edges) out.edges.push_back({edge.from, edge.to, edge.costs});
  return out;
}

offsets::Problem read_problem(const plan::OffsetProblem& problem) {
  offsets::Problem out{problem.cycle, problem.nodes, problem.orders, problem.node_costs, {}, {}};
  for (const plan::FixedOffset& fixed : problem.fixed) out.fixed.push_back({fixed.node, fixed.label});
  for (const plan::OffsetEdge& edge : problem.edges) out.edges.push_back({edge.from, edge.to, edge.costs});
  return out;
}

plan::Certificate written_certificate(const offsets::Answer& answer) {
  plan::Certificate out;
  out.scale = answer.certificate.scale;
  out.infeasible = answer.status == offsets::Status::infeasible;
  out.bound = answer.bound;
  if (answer.status == offsets::Status::solved) {
    out.value = answer.value;
    out.offsets = answer.assignment.labels;
    out.orders = answer.assignment.orders;
  }
  for (const offsets::Step& step : answer.certificate.steps) out.steps.push_back({written(step.kind), step.first, step.second});
  for (const offsets::Alpha& alpha : answer.certificate.alphas) out.alphas.push_back({alpha.edge, alpha.at_from, alpha.values});
  for (const offsets::CertificateCycle& cycle : answer.certificate.cycles) out.cycles.push_back(written(cycle));
  return out;
}

}  // namespace entrain::drafting
