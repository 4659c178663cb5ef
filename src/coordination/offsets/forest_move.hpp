// One move of the search: rigid clusters of nodes, as many of them as form a forest, shifted against each other at least cost.
//
// A cluster keeps the differences inside it; a cluster of one node may change its order as well. Given the nodes that stay, the best shifts
// of a forest of clusters are found exactly, by messages from the leaves to the root, each one circular convolution. The move never makes
// an assignment worse.
#pragma once

#include <vector>

#include "coordination/offsets/labelling.hpp"
#include "coordination/offsets/random.hpp"

namespace entrain::offsets {

class ForestMove {
 public:
  explicit ForestMove(const SeenTables& tables);

  // Moves nodes of `region` (distinct); the others stay. Clusters grow to at most `largest` nodes.
  void run(const std::vector<int>& region, int largest, Random& random, Labels& labels);

 private:
  struct Cluster {
    std::vector<int> nodes;
    int tree = -1;                   // root of its tree in the union-find; -1: stays
    int parent = -1, parent_link = -1;
    std::vector<int> links;
    std::size_t costs = 0;           // first lane of its rows, one an order
    int orders = 1;
    std::size_t message = 0;
  };
  struct Link {
    int first = 0, second = 0;       // clusters, first < second
    std::size_t rows = 0;            // by shift of second less that of first; by order of first, order of second
  };

  void grow_clusters(const std::vector<int>& region, int largest, Random& random);
  void choose_forest(const std::vector<int>& region);
  bool joins_distinct_trees(int cluster);
  int root_of(int cluster);
  void sum_costs(const Labels& labels);
  void sum_node(int cluster, int node, const Labels& labels);
  std::size_t new_rows(int count, Lane value);
  int link_between(int first, int second);
  void order_trees();
  void send_messages();
  void choose_shifts(Labels& labels);
  void apply(int cluster, int order, int shift, Labels& labels);

  const SeenTables& m_tables;
  const Core& m_core;
  std::vector<int> m_cluster_of;     // by core node; -1: outside the region
  std::vector<Cluster> m_clusters;
  std::size_t m_cluster_count = 0;
  std::vector<int> m_union, m_sequence, m_neighbours, m_shift, m_order;
  std::vector<Link> m_links;
  std::vector<Lane> m_lanes;
  std::size_t m_used = 0;
  std::vector<Lane> m_row, m_reversed;
  ConvolutionSpace m_space;
};

}  // namespace entrain::offsets
