// The search for good assignments of the core: a first one from what the cycles believe, then forest moves and kicks.
//
// A kick shifts a random cluster of a small region, forest moves put the region right again, and the result stays if it is no worse.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/offsets/cycle_bound.hpp"
#include "coordination/offsets/forest_move.hpp"
#include "coordination/offsets/labelling.hpp"

namespace entrain::offsets {

// Labels along a spanning forest of the edges whose difference is most certain, at that difference.
Labels labels_from_beliefs(const Core& core, const std::vector<Belief>& beliefs);

class Search {
 public:
  Search(const SeenTables& tables, std::uint64_t seed);

  // Goes on from `labels` if they cost less than what it has.
  void offer(const Labels& labels);
  // Forest moves over everything, `count` times.
  void sweep(int count);
  // One kick in each of `count` random regions.
  void kick(int count);

  const Labels& labels() const { return m_labels; }
  std::int64_t total() const { return m_total; }

 private:
  std::vector<int> region_around(int node, int size);
  void kick_region(const std::vector<int>& region);
  int cluster_limit(std::size_t region);

  const SeenTables& m_tables;
  const Core& m_core;
  ForestMove m_move;
  Random m_random;
  Labels m_labels;
  std::int64_t m_total;
  std::vector<int> m_all;
  std::vector<char> m_marks;
};

}  // namespace entrain::offsets
