// The simplifying steps of a certificate, carried out by the review's own arithmetic, and the plain cost of an answer.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "plan/certificate.hpp"
#include "plan/offset_problem.hpp"

namespace entrain::review {

using Entries = std::vector<std::int64_t>;

// Stands for a forbidden entry; admissible entries and their sums stay below `largest_magnitude` either way.
inline constexpr std::int64_t excluded = std::int64_t{1} << 62;
inline constexpr std::int64_t largest_magnitude = std::int64_t{1} << 61;

struct LiveEdge {
  int from = 0, to = 0;
  bool alive = true;
  Entries costs;  // scaled; by order of from, order of to, difference
};

// The problem after the steps: in units of 1 / scale.
struct Reduced {
  int cycle = 1;
  std::vector<int> orders;
  std::vector<Entries> node_costs;
  std::vector<char> present;  // by node: not yet removed
  std::vector<LiveEdge> edges;
  std::int64_t constant = 0;
  bool infeasible = false;
};

inline std::size_t entry(int p, int q, int orders_to, int d, int cycle) {
  return (static_cast<std::size_t>(p) * static_cast<std::size_t>(orders_to) + static_cast<std::size_t>(q)) * static_cast<std::size_t>(cycle) + static_cast<std::size_t>(d);
}

// sum += term, unless it would not fit.
bool add_checked(std::int64_t& sum, std::int64_t term);

// out[k] = min(out[k], a[i] + b[j]) over i + j = k modulo the cycle, excluded entries left out.
void add_best_sums(const std::int64_t* a, const std::int64_t* b, int cycle, std::int64_t* out);

// Checks and carries out the steps. Errors: a problem whose tables do not fit its sizes, a step that is not allowed, numbers too large.
[[nodiscard]] Result<Reduced> reduce(const plan::OffsetProblem& problem, const plan::Certificate& certificate, const std::string& source);

// What the labels cost in the problem, fixed labels obeyed; nothing, with the fault named, if they are not an admissible answer.
std::optional<std::int64_t> cost_of(const plan::OffsetProblem& problem, const std::vector<int>& labels, const std::vector<int>& orders, std::string& fault);

}  // namespace entrain::review
