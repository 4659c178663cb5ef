// The cycles that the bound is made of: faces where a part of the graph is planar, short independent cycles elsewhere.
#pragma once

#include <vector>

#include "coordination/offsets/certificate.hpp"
#include "coordination/offsets/core.hpp"

namespace entrain::offsets {

using Walk = std::vector<WalkedEdge>;

// Simple closed walks over core edges; every edge that lies on a cycle is in at least one. Planar two-connected parts: all faces but the
// longest (embedding by Boyer and Myrvold, Journal of Graph Algorithms and Applications 8(3), 2004, from Boost). Others: for every edge a
// shortest cycle through it, then fundamental cycles for what is left. In an order that walks over the graph.
std::vector<Walk> cycles_of(const Core& core);

}  // namespace entrain::offsets
