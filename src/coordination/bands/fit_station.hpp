// Where one station's offset may lie when the bands of its directions are where they are.
#pragma once

#include <optional>
#include <vector>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/corridor_bands.hpp"

namespace entrain::bands {

// A direction's band: leading edge at its first stop.
struct BandDemand {
  bool active = false;  // false: the direction asks for nothing
  Tick width = 0, edge = 0;
};

// Offsets are any ticks, or whole seconds from `origin` on.
struct Grid {
  bool whole_seconds = false;
  Tick origin = 0;
};

class StationFit {
 public:
  // The arc of offsets that serves every band, for the first option that has one (its longest arc, then the earliest in
  // the list). `is_fixed`: only `fixed` itself. The station's period is a multiple of the grid.
  std::optional<Placed> fit(const CompiledStation& station, int index, const std::vector<int>& options,
                            const std::vector<BandDemand>& demands, const Grid& grid, bool is_fixed, Tick fixed);

 private:
  struct Piece {
    Tick from = 0, length = 0;
  };
  bool meet(const CompiledStation& station, const Visit& visit, int option, const BandDemand& demand, const Grid& grid);
  static void add_common(std::vector<Piece>& to, const Piece& a, const Piece& b, Tick period);

  std::vector<Piece> m_pieces, m_next;
};

}  // namespace entrain::bands
