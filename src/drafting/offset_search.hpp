// Offsets of least cost on a graph of circular costs, from a start that is allowed. The border to the offset engine.
#pragma once

#include <cstdint>
#include <limits>
#include <string>
#include <vector>

#include "drafting/sweep.hpp"

namespace entrain::drafting {

struct OffsetEdge {
  int from = 0, to = 0;
  std::vector<std::int64_t> costs;  // by (x_to - x_from) mod cycle; OffsetSearch::forbidden rules a difference out
};

struct OffsetSearch {
  static constexpr std::int64_t forbidden = std::numeric_limits<std::int64_t>::max();
  int cycle = 1;
  std::vector<int> start;   // by node; allowed
  std::vector<bool> fixed;  // by node
  std::vector<OffsetEdge> edges;
};

struct OffsetSearchAnswer {
  std::vector<int> labels;
  std::int64_t value = 0, bound = 0;
  bool solved = false;               // false: the start stands, nothing is proved
  std::string certificate, problem;  // texts of the proof and of what it is about; empty unless asked for
};

// Never worse than the start.
OffsetSearchAnswer search_offsets(const OffsetSearch& search, const CoordinateOptions& options);

}  // namespace entrain::drafting
