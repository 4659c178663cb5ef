// Towns made in code, so that the stages can be tried without files: an east-west main street with four-leg signals, and a grid.
#pragma once

#include "drafting/inputs.hpp"

namespace entrain::made_town {

struct Street {
  int signals = 4;
  double spacing_m = 300;
  double main_vph = 600, side_vph = 250, left_vph = 60;  // a lane group each
  int main_lanes = 2;
};

// One corridor "main" from west to east (directions EB, WB) through signals A1, A2, ...; every turn allowed, crossings on all legs.
drafting::Inputs main_street(const Street& street);

// rows x columns of signals "R1C1", ...; corridors along the first row ("row") and the first column ("column"), which share R1C1.
drafting::Inputs grid(int rows, int columns, double spacing_m);

// The standard the towns are planned by.
standards::DesignStandard plain_standard();

}  // namespace entrain::made_town
