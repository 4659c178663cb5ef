// Everything decided, laid out as a plan.
#pragma once

#include "drafting/candidate.hpp"
#include "plan/plan.hpp"

namespace entrain::drafting {

plan::Plan assemble(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const Coordination& coordination);

// Links with their feeds for a period, from the network's links, turning flows and the groups that serve them; plan words.
std::vector<plan::Link> plan_links(const Inputs& inputs, const LocalTiming& local, std::size_t period);

// Corridors with their stops for a period; no bands yet.
std::vector<plan::Corridor> plan_corridors(const Inputs& inputs, const LocalTiming& local, std::size_t period);

// The share of a direction in a period.
double corridor_weight(const project::Corridor& corridor, const std::string& direction, const std::string& period);

// What every plan says.
std::vector<std::string> standing_cautions();

}  // namespace entrain::drafting
