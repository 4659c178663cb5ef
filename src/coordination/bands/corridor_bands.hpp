// One corridor alone, its offsets free: the exact optimum by the share rule in one or a few sweeps.
#pragma once

#include <vector>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/sweep.hpp"

namespace entrain::bands {

// Widths of the two directions, in ticks; the second is 0 where there is one direction.
struct Widths {
  Tick first = 0, second = 0;
  bool operator==(const Widths&) const = default;
};

// Where a station's offset may lie: [from, from + length] modulo its period, closed.
struct Placed {
  int station = 0, option = 0;
  Tick from = 0, length = 0;
};

struct CorridorOptimum {
  Widths widths;
  double share = 0;  // ticks per weight
  Tick phi = 0;      // first leading edge minus second trailing edge
  bool all_directions = true;
  int single = 0;  // the direction that has its band where not all have
};

// True where no direction meets a station twice: then the sweep decides everything.
bool is_simple(const Compiled& problem, int corridor);

class CorridorBands {
 public:
  // `options`: allowed options by station. `include`: stations to look at, by station; null: all that the corridor
  // meets.
  CorridorBands(const Compiled& problem, int corridor, const std::vector<std::vector<int>>& options,
                const std::vector<bool>* include = nullptr);

  CorridorOptimum best();
  // The largest sum the windows leave at any phi for bands at least so wide; -unlimited if a window is too short.
  Peak room(const Widths& widths);
  // Arcs of the offsets for a first leading edge at 0; by station met, ascending. The widths must fit at phi.
  std::vector<Placed> place(const CorridorOptimum& optimum) const;
  // Stations that alone rule out a larger share, and with the share a larger sum of widths.
  std::vector<int> witness(const CorridorOptimum& optimum);

  // Arcs of phi at which bands of these widths fit, in [0, cycle), as closed intervals [from, to], ascending.
  struct PhiArc {
    Tick from = 0, to = 0;
  };
  std::vector<PhiArc> fitting(const Widths& widths) const;

 private:
  struct Pair {  // windows g and h of one option
    Tick c = 0, reserve = 0, g = 0, h = 0;
    Tick first_end = 0, second_end = 0;  // latest offset that serves a leading edge at 0 in that direction
    int option = 0;
    bool first_open = false, second_open = false;
  };
  struct Group {  // one station met by both directions
    int station = 0;
    Tick period = 0;
    int begin = 0, end = 0;
  };
  struct Cap {  // one window of a station met by one direction only
    Tick length = 0, end = 0;
    int option = 0;
    bool open = false;
  };
  struct CapGroup {
    int station = 0;
    bool second = false;
    Tick period = 0, longest = 0;
    int begin = 0, end = 0;
  };
  void add_pairs(int station, const Visit& first, const Visit& second, const std::vector<int>& options);
  void add_caps(int station, const Visit& visit, bool second, const std::vector<int>& options);
  void add_station(int station, const std::vector<int>& options);
  void add_witness(const Widths& widths, bool both, std::vector<int>& found);
  void prepare_shares();
  bool fits_at(const Widths& widths, Tick phi) const;
  bool best_at_peak(CorridorOptimum& optimum, double first_weight, double second_weight);
  bool filter(double t, Widths base, double first_rate, double second_rate);
  double climb(Widths base, double first_rate, double second_rate);
  Widths settle(double t, Widths base, double first_rate, double second_rate);
  double search(std::vector<double>& limits, Widths base, double first_rate, double second_rate);
  Peak peak_of_filtered() { return m_sweep.highest(m_sweep_stations, m_terms, m_problem.cycle); }
  void extend(CorridorOptimum& optimum);
  CorridorOptimum one_direction(int direction) const;
  Tick widest(int direction) const;
  bool place_pair(const Group& group, const Widths& widths, Tick phi, Placed& placed) const;
  std::vector<Placed> place_one(const CorridorOptimum& optimum) const;
  const std::vector<int>& options_of(int station) const { return m_options[static_cast<std::size_t>(station)]; }

  const Compiled& m_problem;
  int m_corridor = 0;
  bool m_two_way = false;
  std::vector<Pair> m_pairs;
  std::vector<Group> m_groups;
  std::vector<Cap> m_caps;
  std::vector<CapGroup> m_cap_groups;
  const std::vector<std::vector<int>>& m_options;
  std::vector<SweepStation> m_sweep_stations;
  std::vector<SweepTerm> m_terms;
  std::vector<SweepStation> m_all_stations;  // of all pairs
  std::vector<SweepTerm> m_all_terms;
  double m_cap = 0,
         m_narrowest = 0;    // shares at which the first station has no pair left, at which the first pair drops out
  bool m_complete = false;   // every station has a pair
  int m_kept = 0;            // pairs the last filter kept, also those of stations that leave phi free
  std::vector<int> m_owner;  // station of each sweep station
  Sweep m_sweep;
};

}  // namespace entrain::bands
