// Several corridors together: options of shared stations by the fairness rule, corridors glued where sharing is a
// forest, searched where it forms rings.
#pragma once

#include "coordination/bands/alone.hpp"
#include "coordination/bands/fit_station.hpp"

namespace entrain::bands {

struct JointSetting {
  Setting setting;            // continuous, or whole seconds where asked for
  std::vector<Alone> own;     // each corridor alone, continuous
  std::vector<Widths> bound;  // widths of the continuous joint answer, by corridor
  std::vector<bool> all_directions;
  std::vector<std::vector<int>> witness;
  double least_ratio_bound = 1;
  bool proved = true;
};

JointSetting solve_all(const Compiled& problem, std::int64_t most_nodes, bool whole_seconds);

// ---- parts ----

// Corridors linked by shared stations, each list ascending.
std::vector<std::vector<int>> components_of(const Compiled& problem);
// True where corridors, free stations that several of them meet, and the clock of fixed ones form no ring.
bool is_forest(const Compiled& problem, const std::vector<int>& corridors);

// Option lists in which stations that several corridors meet have one option left: the sorted shares of own best are
// lexicographically largest, with whole-second offsets where asked for. `proved` false: too many combinations, the
// first options were taken.
OptionLists choose_shared_options(const Compiled& problem, const std::vector<int>& corridors,
                                  const std::vector<Alone>& own, std::int64_t most_nodes, bool whole_seconds,
                                  bool& proved);

// Bands of corridors whose sharing forms rings.
struct RingAnswer {
  std::vector<BandDemand> demands;  // by frame: widths and edges
  double least_ratio_bound = 1;
  bool proved = true;
};
// `known`: a setting to start from and never to fall behind.
RingAnswer solve_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                      const Setting& known, std::int64_t most_nodes);

// Sorted ratios of the corridors, then the sum of all widths: larger is better.
struct Worth {
  std::vector<double> ratios;
  Tick total = 0;
  bool operator<(const Worth& other) const;
};
// Ratio of each corridor, in the order of the list: share of own best, or the single direction's width of its own.
std::vector<double> ratios_of(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                              const std::vector<FrameBand>& bands);

// Local search over offsets (multiples of `step`; fixed ones stay) and options, from one start a corridor: its own
// best, the others glued on.
Setting search_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                    const Setting& base, Tick step);
// The same from a given setting, rounded to whole seconds first.
Setting round_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                   Setting setting);
Worth worth_of(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
               const std::vector<FrameBand>& bands);

// Share of own best, 1 where the corridor has none alone.
double ratio_of(double share, const Alone& own);

}  // namespace entrain::bands
