#include "review/signal_view.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"

namespace entrain::review {
namespace {

template <class List>
void index_ids(const List& list, const char* what, std::map<std::string, std::size_t>& index, Findings& findings) {
  for (std::size_t i = 0; i < list.size(); ++i)
    if (!index.emplace(list[i].id, i).second) findings.violation("duplicate-id", fmt::format("{} {} stands twice", what, printable(list[i].id)), "Give each its own id");
}

void check_reference(const std::map<std::string, std::size_t>& index, const std::string& id, const std::string& where, const char* what, Findings& findings) {
  if (index.count(id) == 0) findings.violation("unknown-reference", fmt::format("{} names the {} {}, which is not there", where, what, printable(id)), "Correct the id or add what is missing");
}

bool is_duration(double s) { return std::isfinite(s) && s >= 0 && s <= longest_cycle_s; }

void check_numbers(const plan::Group& group, Findings& findings) {
  const auto check = [&](const char* name, double value) {
    if (!is_duration(value)) findings.violation("number-out-of-range", fmt::format("group {}: {} is {}", group.id, name, number_text(value)), "Give seconds from 0 to 3600");
  };
  check("yellow_s", group.yellow_s);
  check("red_clearance_s", group.red_clearance_s);
  check("minimum_green_s", group.minimum_green_s);
  check("clearance_s", group.clearance_s);
  for (const plan::Green& green : group.greens) check("a green's duration_s", green.duration_s);
}

bool on_tenth(double seconds) { return std::fabs(seconds * 10 - std::round(seconds * 10)) < 1e-6; }

void lay_out_greens(SignalView& view, Findings& findings) {
  for (const plan::Group& group : view.signal.groups) {
    auto& spans = view.greens.emplace_back();
    for (const plan::Green& green : group.greens) {
      if (!std::isfinite(green.start_s) || std::fabs(green.start_s) > 10 * longest_cycle_s || !is_duration(green.duration_s)) continue;
      if (!on_tenth(green.start_s) || !on_tenth(green.duration_s))
        findings.violation("green-not-in-tenths", fmt::format("group {}: green [{} s, {} s) is no whole number of tenths", group.id, number_text(green.start_s, 4), number_text(green.start_s + green.duration_s, 4)),
                           "Round the green to tenths of a second");
      if (green.start_s < 0 || green.start_s * 10 >= view.cycle || to_tenths(green.duration_s) > view.cycle)
        findings.violation("green-outside-cycle", fmt::format("group {}: green starts at {} s and lasts {} s in a cycle of {} s", group.id, number_text(green.start_s), number_text(green.duration_s), number_text(view.signal.cycle_s)),
                           "Start in [0, cycle) and last at most the cycle");
      spans.push_back({modulo(to_tenths(green.start_s), view.cycle), std::min(to_tenths(green.duration_s), view.cycle)});
    }
  }
}

void check_references(SignalView& view, Findings& findings) {
  const plan::Signal& signal = view.signal;
  for (const plan::Movement& m : signal.movements)
    for (const std::string* leg : {&m.from_leg, &m.to_leg}) check_reference(view.leg, *leg, "movement " + m.id, "leg", findings);
  for (const plan::Crossing& c : signal.crossings) check_reference(view.leg, c.leg, "crossing " + c.id, "leg", findings);
  for (const plan::LaneGroup& g : signal.lane_groups)
    for (const std::string& m : g.movements)
      if (!signal.movements.empty()) check_reference(view.movement, m, "lane group " + g.id, "movement", findings);
  for (const plan::Group& g : signal.groups) {
    for (const plan::Served& s : g.serves)
      if (!signal.movements.empty()) check_reference(view.movement, s.movement, "group " + g.id, "movement", findings);
    for (const std::string& c : g.crossings)
      if (!signal.crossings.empty()) check_reference(view.crossing, c, "group " + g.id, "crossing", findings);
    if (g.parent) check_reference(view.group, *g.parent, "group " + g.id, "group", findings);
  }
  for (const plan::Conflict& c : signal.conflicts)
    for (const std::string* id : {&c.a, &c.b}) check_reference(view.group, *id, "the list of conflicts", "group", findings);
  check_reference(view.group, signal.reference_group, "reference_group", "group", findings);
  for (const std::string& id : signal.controller.coordinated) check_reference(view.group, id, "coordinated", "group", findings);
  if (signal.controller.ring_barrier)
    for (const auto& ring : signal.controller.ring_barrier->rings)
      for (const std::string& id : ring) check_reference(view.group, id, "a ring", "group", findings);
}

bool geometry_is_complete(const SignalView& view) {
  const plan::Signal& signal = view.signal;
  if (signal.legs.empty() || signal.movements.empty()) return false;
  return std::all_of(signal.groups.begin(), signal.groups.end(), [&](const plan::Group& g) {
    if (g.kind == plan::GroupKind::pedestrian) return !g.crossings.empty() && std::all_of(g.crossings.begin(), g.crossings.end(), [&](const auto& c) { return view.crossing.count(c) != 0; });
    return !g.serves.empty() && std::all_of(g.serves.begin(), g.serves.end(), [&](const auto& s) { return view.movement.count(s.movement) != 0; });
  });
}

}  // namespace

int modulo(int value, int cycle) {
  const int rest = value % cycle;
  return rest < 0 ? rest + cycle : rest;
}

int to_tenths(double seconds) {
  if (!std::isfinite(seconds)) return 0;
  return static_cast<int>(std::lround(std::min(1e7, std::max(-1e7, seconds)) * 10));
}

int SignalView::after_green(std::size_t i) const {
  const plan::Group& g = signal.groups[i];
  return g.kind == plan::GroupKind::pedestrian ? to_tenths(g.clearance_s) : to_tenths(g.yellow_s) + to_tenths(g.red_clearance_s);
}

double SignalView::standard(const char* key, double otherwise) const {
  const auto found = plan.standard.values.find(key);
  return found == plan.standard.values.end() ? otherwise : found->second;
}

SignalView view_of(const plan::Plan& plan, const plan::Signal& signal, Findings& findings) {
  SignalView view{plan, signal, 0, {}, {}, {}, {}, {}, false};
  index_ids(signal.groups, "group", view.group, findings);
  index_ids(signal.movements, "movement", view.movement, findings);
  index_ids(signal.legs, "leg", view.leg, findings);
  index_ids(signal.crossings, "crossing", view.crossing, findings);
  check_references(view, findings);
  for (const plan::Group& group : signal.groups) check_numbers(group, findings);
  if (std::isfinite(signal.cycle_s) && signal.cycle_s >= 1 && signal.cycle_s <= longest_cycle_s) view.cycle = to_tenths(signal.cycle_s);
  else findings.violation("number-out-of-range", fmt::format("cycle_s is {}", number_text(signal.cycle_s)), "Give a cycle from 1 to 3600 s");
  if (view.cycle > 0) lay_out_greens(view, findings);
  view.has_geometry = geometry_is_complete(view);
  return view;
}

}  // namespace entrain::review
