#include "review/references.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"

namespace entrain::review {
namespace {

template <class List>
void index_ids(const List& list, const char* what, std::map<std::string, std::size_t>& index, Findings& findings) {
  for (std::size_t i = 0; i < list.size(); ++i)
    if (!index.emplace(list[i].id, i).second) findings.violation("duplicate-id", fmt::format("{} {} stands twice", what, printable(list[i].id)), "Give each its own id");
}

struct References {
  Findings& findings;

  void check(const std::map<std::string, std::size_t>& index, const std::string& id, const std::string& where, const char* what) {
    if (index.count(id) == 0) findings.violation("unknown-reference", fmt::format("{} names the {} {}, which is not there", printable(where), what, printable(id)), "Correct the id or add what is missing");
  }

  void once(const std::vector<std::string>& ids, const std::string& where) {
    std::set<std::string> seen;
    for (const std::string& id : ids)
      if (!seen.insert(id).second) findings.violation("duplicate-id", fmt::format("{} names {} twice", printable(where), printable(id)), "Name it once");
  }
};

void check_group(const SignalView& view, const plan::Group& g, References& references) {
  std::vector<std::string> served;
  for (const plan::Served& s : g.serves) {
    if (!view.signal.movements.empty()) references.check(view.movement, s.movement, "group " + g.id, "movement");
    served.push_back(s.movement);
  }
  references.once(served, "group " + g.id);
  references.once(g.crossings, "group " + g.id);
  for (const std::string& c : g.crossings)
    if (!view.signal.crossings.empty()) references.check(view.crossing, c, "group " + g.id, "crossing");
  if (g.parent) references.check(view.group, *g.parent, "group " + g.id, "group");
}

void check_controller(const SignalView& view, References& references) {
  const plan::Controller& controller = view.signal.controller;
  for (const std::string& id : controller.coordinated) references.check(view.group, id, "coordinated", "group");
  references.once(controller.coordinated, "coordinated");
  if (!controller.ring_barrier) return;
  for (const auto& ring : controller.ring_barrier->rings)
    for (const std::string& id : ring) references.check(view.group, id, "a ring", "group");
  for (const auto& barrier : controller.ring_barrier->barriers_after)
    for (const std::string& id : barrier) references.check(view.group, id, "a barrier", "group");
}

void check_references(const SignalView& view, Findings& findings) {
  References references{findings};
  const plan::Signal& signal = view.signal;
  for (const plan::Movement& m : signal.movements)
    for (const std::string* leg : {&m.from_leg, &m.to_leg}) references.check(view.leg, *leg, "movement " + m.id, "leg");
  for (const plan::Crossing& c : signal.crossings) references.check(view.leg, c.leg, "crossing " + c.id, "leg");
  for (const plan::LaneGroup& g : signal.lane_groups)
    for (const std::string& m : g.movements)
      if (!signal.movements.empty()) references.check(view.movement, m, "lane group " + g.id, "movement");
  for (const plan::Group& g : signal.groups) check_group(view, g, references);
  for (const plan::Conflict& c : signal.conflicts)
    for (const std::string* id : {&c.a, &c.b}) references.check(view.group, *id, "the list of conflicts", "group");
  references.check(view.group, signal.reference_group, "reference_group", "group");
  check_controller(view, references);
  std::map<std::string, std::size_t> lane_groups;
  index_ids(signal.lane_groups, "lane group", lane_groups, findings);
  for (const plan::Oversaturation& over : signal.oversaturated) references.check(lane_groups, over.lane_group, "oversaturated", "lane group");
}

// What is missing, or nothing.
std::string missing_geometry(const SignalView& view) {
  const plan::Signal& signal = view.signal;
  if (signal.groups.empty()) return "no signal groups";
  if (signal.legs.empty() || signal.movements.empty()) return "no legs and movements";
  const auto usable = [&](const std::string& id) { return view.leg.count(id) != 0 && std::isfinite(signal.legs[view.leg.at(id)].bearing_deg); };
  for (const plan::Movement& m : signal.movements)
    if (!usable(m.from_leg) || !usable(m.to_leg)) return fmt::format("movement {} has no usable legs", printable(m.id));
  for (const plan::Crossing& c : signal.crossings)
    if (!usable(c.leg)) return fmt::format("crossing {} has no usable leg", printable(c.id));
  for (const plan::Group& g : signal.groups) {
    for (const plan::Served& s : g.serves)
      if (view.movement.count(s.movement) == 0) return fmt::format("group {} serves {}, which is no movement of it", printable(g.id), printable(s.movement));
    for (const std::string& c : g.crossings)
      if (view.crossing.count(c) == 0) return fmt::format("group {} serves {}, which is no crossing of it", printable(g.id), printable(c));
    if (g.serves.empty() && g.crossings.empty()) return fmt::format("group {} names no movement and no crossing", printable(g.id));
  }
  return {};
}

void check_turn(const SignalView& view, const plan::Movement& m, Findings& findings) {
  const auto from = view.leg.find(m.from_leg), to = view.leg.find(m.to_leg);
  if (from == view.leg.end() || to == view.leg.end()) return;
  const double off = deflection_deg(view.signal.legs[from->second].bearing_deg, view.signal.legs[to->second].bearing_deg);
  bool contradicts = false;
  if (m.from_leg == m.to_leg) contradicts = m.turn != plan::Turn::u_turn;
  else if (m.turn == plan::Turn::left) contradicts = off > 5;
  else if (m.turn == plan::Turn::right) contradicts = off < -5;
  else if (m.turn == plan::Turn::through) contradicts = std::fabs(off) > 75;
  else contradicts = std::fabs(off) < 120;
  if (!contradicts) return;
  static constexpr const char* names[] = {"left turn", "through movement", "right turn", "U-turn"};
  findings.violation("turn-contradicts-legs", fmt::format("movement {} is called a {}, but from leg {} to leg {} bends by {} degrees to the right", printable(m.id), names[static_cast<int>(m.turn)], printable(m.from_leg),
                                                          printable(m.to_leg), number_text(off, 0)), "Correct the turn or the legs: which yields are allowed hangs on it");
}

// False where two legs lie on each other: which paths cross can't be told.
bool check_legs(const SignalView& view, Findings& findings) {
  std::vector<std::pair<double, const plan::Leg*>> round;
  for (const plan::Leg& leg : view.signal.legs) {
    double bearing = std::fmod(leg.bearing_deg, 360.0);
    round.emplace_back(bearing < 0 ? bearing + 360 : bearing, &leg);
  }
  std::sort(round.begin(), round.end(), [](const auto& a, const auto& b) { return a.first < b.first; });
  bool apart = true;
  for (std::size_t i = 0; i < round.size() && round.size() > 1; ++i) {
    const auto& [bearing, leg] = round[i];
    const auto& [next_bearing, next] = round[(i + 1) % round.size()];
    const double gap = next_bearing - bearing + (i + 1 == round.size() ? 360 : 0);
    if (gap >= 3) continue;
    const bool together = gap < 0.01;
    apart = apart && !together;
    findings.add("legs-coincide", together ? Severity::violation : Severity::note, fmt::format("legs {} and {} lie {} degrees apart: which paths cross hangs on their order", printable(leg->id), printable(next->id), number_text(gap, 2)),
                 "Check their bearings");
  }
  return apart;
}

}  // namespace

double deflection_deg(double from_bearing_deg, double to_bearing_deg) {
  const double off = std::remainder(to_bearing_deg - from_bearing_deg - 180, 360.0);
  return off <= -180 ? off + 360 : off;
}

void resolve_ids(SignalView& view, Findings& findings) {
  index_ids(view.signal.groups, "group", view.group, findings);
  index_ids(view.signal.movements, "movement", view.movement, findings);
  index_ids(view.signal.legs, "leg", view.leg, findings);
  index_ids(view.signal.crossings, "crossing", view.crossing, findings);
  check_references(view, findings);
}

void check_geometry(SignalView& view, Findings& findings) {
  view.why_no_geometry = missing_geometry(view);
  for (const plan::Leg& leg : view.signal.legs)
    if (!std::isfinite(leg.bearing_deg) || std::fabs(leg.bearing_deg) > 720)
      findings.violation("number-out-of-range", fmt::format("leg {}: bearing {} degrees", printable(leg.id), number_text(leg.bearing_deg)), "Give degrees clockwise from north");
  if (!view.why_no_geometry.empty()) return;
  for (const plan::Movement& m : view.signal.movements) check_turn(view, m, findings);
  if (!check_legs(view, findings)) view.why_no_geometry = "two legs lie on each other";
  view.has_geometry = view.why_no_geometry.empty();
}

}  // namespace entrain::review
