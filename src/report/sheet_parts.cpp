#include "report/sheet_parts.hpp"

#include <algorithm>
#include <cmath>
#include <functional>

#include "base/number_text.hpp"
#include "report/plan_view.hpp"
#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

const plan::Group* group_in(const SignalPeriod& pattern, const std::string& id) { return find_group(*pattern.signal, id); }

std::string joined(const std::vector<std::string>& texts, const char* between) {
  std::string out;
  for (const std::string& text : texts) out += (out.empty() ? "" : between) + text;
  return out;
}


std::string clock_text(const plan::Plan& plan, const plan::Signal& signal) {
  return plan.clock.reference + ", " + plan.clock.time_zone + (signal.clock.empty() ? "" : "; set by " + signal.clock);
}

std::string old_text(const std::optional<double>& old_value) { return old_value ? "was " + seconds_text(*old_value) : ""; }


// Both references; under coordinated-actuated operation the begin of yellow leads, for it stands still.
void add_offsets(Facts& card, const plan::Signal& signal) {
  const std::vector<CoordinatedOffset> offsets = coordinated_offsets(signal);
  if (offsets.empty()) return card.facts.push_back({"Offset", "not known: no coordinated green", "", ""});
  const CoordinatedOffset& first = offsets.front();
  Fact green{"Offset, begin of green " + first.group, seconds_text(first.begin_of_green_s) + " s", signal.running ? old_text(signal.running->offset_s) : "", "big"};
  Fact yellow{"Offset, begin of yellow " + first.group, seconds_text(first.begin_of_yellow_s) + " s", "", "middle"};
  const bool yellow_leads = signal.operation == plan::Operation::coordinated_actuated;
  if (yellow_leads) std::swap(green.role, yellow.role), std::swap(green, yellow);
  card.facts.push_back(std::move(green));
  card.facts.push_back(std::move(yellow));
  for (std::size_t i = 1; i < offsets.size(); ++i) {
    const std::string green_s = seconds_text(offsets[i].begin_of_green_s), yellow_s = seconds_text(offsets[i].begin_of_yellow_s);
    card.facts.push_back({"Begin of green / yellow " + offsets[i].group, green_s + " / " + yellow_s + " s", "", ""});
  }
}

std::string ends_text(const plan::Signal& signal) {
  std::string held;
  if (signal.offset_fixed) held += "offset ";
  if (signal.sequence_fixed) held += "sequence ";
  if (signal.splits_fixed) held += "splits ";
  return held.empty() ? "" : held + "held as given";
}

std::string worst_degree(const SignalPeriod& pattern) {
  double worst = -1;
  std::string where;
  for (const auto& figures : pattern.period->figures.lane_groups)
    if (figures.signal == pattern.signal->id && figures.degree_of_saturation > worst) worst = figures.degree_of_saturation, where = figures.lane_group;
  return worst < 0 ? "-" : ratio_text(worst) + " at " + isolated(where);
}

std::string split_of(const plan::Group& group) {
  if (group.split_s) return seconds_text(*group.split_s);
  if (group.kind == plan::GroupKind::pedestrian || group.greens.empty()) return "-";
  std::vector<std::string> all;
  for (const plan::Green& green : group.greens) all.push_back(seconds_text(green.duration_s + group.yellow_s + group.red_clearance_s));
  return joined(all, "+");
}

std::string degree_of(const SignalPeriod& pattern, const plan::Group& group) {
  if (group.degree_of_saturation) return ratio_text(*group.degree_of_saturation);
  double worst = -1;
  for (const auto& figures : pattern.period->figures.lane_groups)
    if (figures.signal == pattern.signal->id && std::find(figures.groups.begin(), figures.groups.end(), group.id) != figures.groups.end())
      worst = std::max(worst, figures.degree_of_saturation);
  return worst < 0 ? "" : ratio_text(worst);
}

// The value of one constant of a group over all periods, which ought to agree.
std::string over_periods(const std::vector<SignalPeriod>& patterns, const std::string& id, const std::function<std::string(const plan::Signal&, const plan::Group&)>& value) {
  std::vector<std::string> values;
  for (const SignalPeriod& pattern : patterns)
    if (const plan::Group* group = group_in(pattern, id)) values.push_back(value(*pattern.signal, *group));
  return joined_once(values);
}

std::string walk_text(const plan::Group& pedestrian) {
  std::vector<std::string> walks;
  for (const plan::Green& green : pedestrian.greens) walks.push_back(seconds_text(green.duration_s));
  return joined(walks, "+") + (pedestrian.service == plan::Service::on_call ? " on call" : "");
}

// Pedestrian groups beside a vehicle group, or the group itself.
std::vector<const plan::Group*> walkers(const plan::Signal& signal, const plan::Group& group) {
  if (group.kind == plan::GroupKind::pedestrian) return {&group};
  return pedestrians_of(signal, group.id);
}

std::string walks(const plan::Signal& signal, const plan::Group& group) {
  std::vector<std::string> texts;
  for (const plan::Group* walker : walkers(signal, group)) texts.push_back(walk_text(*walker));
  return joined_once(texts);
}

std::string clearances(const plan::Signal& signal, const plan::Group& group) {
  std::vector<std::string> texts;
  for (const plan::Group* walker : walkers(signal, group)) texts.push_back(seconds_text(walker->clearance_s));
  return joined_once(texts);
}

std::string ring_text(const plan::Signal& signal, const plan::Group& group) {
  const auto place = ring_place(signal, group.id);
  return place ? std::to_string(place->ring) + "." + std::to_string(place->place) : "";
}

std::string served_with_walkers(const plan::Signal& signal, const plan::Group& group) {
  std::string text = served_text(group);
  for (const plan::Group* walker : walkers(signal, group))
    if (walker != &group) text += (text.empty() ? "" : "; ") + std::string("walk ") + isolated(walker->id);
  return text;
}

// Vehicle groups and pedestrian groups that run with none of them.
bool has_row(const std::vector<SignalPeriod>& patterns, const std::string& id) {
  return std::any_of(patterns.begin(), patterns.end(), [&](const SignalPeriod& pattern) {
    const plan::Group* group = group_in(pattern, id);
    return group != nullptr && (group->kind != plan::GroupKind::pedestrian || !group->parent || find_group(*pattern.signal, *group->parent) == nullptr);
  });
}

std::vector<const plan::Signal*> signals_of(const std::vector<SignalPeriod>& patterns) {
  std::vector<const plan::Signal*> signals;
  for (const SignalPeriod& pattern : patterns) signals.push_back(pattern.signal);
  return signals;
}

bool is_actuated(const std::vector<SignalPeriod>& patterns) {
  return std::any_of(patterns.begin(), patterns.end(), [](const SignalPeriod& p) { return p.signal->operation == plan::Operation::coordinated_actuated; });
}

void add_period_columns(Table& table, const std::vector<SignalPeriod>& patterns, bool with_force_off) {
  for (const SignalPeriod& pattern : patterns) {
    const std::string& name = pattern.period->plan.period;
    table.columns.push_back({isolated(name) + " split", Align::right});
    if (with_force_off) table.columns.push_back({isolated(name) + " force-off", Align::right});
    table.columns.push_back({isolated(name) + " v/c", Align::right});
  }
}

void add_period_cells(std::vector<Cell>& row, const SignalPeriod& pattern, const std::string& id, bool with_force_off) {
  const plan::Group* group = group_in(pattern, id);
  const std::size_t empty = with_force_off ? 3 : 2;
  if (group == nullptr) return (void)row.insert(row.end(), empty, Cell("-"));
  std::string old_value;
  if (pattern.signal->running && pattern.signal->running->splits_s.count(id) != 0) old_value = "was " + seconds_text(pattern.signal->running->splits_s.at(id));
  row.emplace_back(split_of(*group), old_value, true);
  if (with_force_off) {
    const auto end = pattern.signal->operation == plan::Operation::coordinated_actuated ? force_off_s(*pattern.signal, *group) : std::nullopt;
    row.emplace_back(end ? seconds_text(*end) : "-");
  }
  row.emplace_back(degree_of(pattern, *group));
}

std::vector<Cell> phase_row(const std::vector<SignalPeriod>& patterns, const std::string& id, bool with_force_off) {
  const auto constant = [&](auto value) { return over_periods(patterns, id, value); };
  std::vector<Cell> row;
  row.emplace_back(isolated(id));
  row.emplace_back(constant(served_with_walkers));
  row.emplace_back(constant(ring_text));
  row.emplace_back(constant([](const plan::Signal&, const plan::Group& g) { return g.kind == plan::GroupKind::pedestrian ? std::string() : seconds_text(g.minimum_green_s); }));
  row.emplace_back(constant(walks));
  row.emplace_back(constant(clearances));
  row.emplace_back(constant([](const plan::Signal&, const plan::Group& g) { return g.kind == plan::GroupKind::pedestrian ? std::string() : fixed_text(g.yellow_s, 1); }));
  row.emplace_back(constant([](const plan::Signal&, const plan::Group& g) { return g.kind == plan::GroupKind::pedestrian ? std::string() : fixed_text(g.red_clearance_s, 1); }));
  for (const SignalPeriod& pattern : patterns) add_period_cells(row, pattern, id, with_force_off);
  return row;
}

struct IntergreenCell {
  std::string intergreen;
  std::optional<double> slack;
};

// From row group to column group, over all periods.
IntergreenCell intergreen_cell(const std::vector<SignalPeriod>& patterns, const std::string& from, const std::string& to) {
  IntergreenCell cell;
  std::vector<std::string> values;
  for (const SignalPeriod& pattern : patterns)
    for (const plan::Conflict& conflict : pattern.signal->conflicts) {
      const bool forth = conflict.a == from && conflict.b == to, back = conflict.b == from && conflict.a == to;
      const plan::Group *a = group_in(pattern, from), *b = group_in(pattern, to);
      if ((!forth && !back) || a == nullptr || b == nullptr) continue;
      const double intergreen = forth ? conflict.intergreen_ab_s : conflict.intergreen_ba_s;
      values.push_back(seconds_text(intergreen));
      const auto slack = slack_s(*pattern.signal, *a, *b, intergreen);
      if (slack && (!cell.slack || *slack < *cell.slack)) cell.slack = slack;
    }
  cell.intergreen = joined_once(values);
  return cell;
}

Cell shown(const IntergreenCell& cell) {
  if (cell.intergreen.empty()) return Cell("");
  if (!cell.slack) return Cell(cell.intergreen);
  const bool short_of = *cell.slack < -0.05;
  return Cell(cell.intergreen, (short_of ? "SHORT " : "+") + seconds_text(*cell.slack), short_of);
}

std::string basis_speed(const plan::ClearanceBasis& basis, Units units) {
  return speed_text(basis.speed_mps, units) + (basis.clearing_speed_mps ? ", clearing " + speed_text(*basis.clearing_speed_mps, units) : "");
}

std::vector<Cell> clearance_row(const plan::Group& group, Units units) {
  const plan::ClearanceBasis& basis = *group.clearance_basis;
  std::string why = "by the standard";
  if (basis.override_by) why = basis.override_by->what + " set by " + basis.override_by->author + ": " + basis.override_by->reason;
  return {isolated(group.id), basis_speed(basis, units), share_text(basis.grade), length_text(basis.width_m, units), fixed_text(group.yellow_s, 1), fixed_text(group.red_clearance_s, 1), why};
}



}  // namespace

std::string schedule_text(const plan::Plan& plan) {
  if (!plan.schedule) return "not scheduled";
  const plan::Schedule& s = *plan.schedule;
  return joined({s.days, s.from + (s.from.empty() && s.to.empty() ? "" : "\xE2\x80\x93") + s.to}, " ");
}

const char* operation_text(plan::Operation operation) {
  switch (operation) {
    case plan::Operation::pretimed: return "pretimed";
    case plan::Operation::coordinated_actuated: return "coordinated-actuated";
    case plan::Operation::free: return "free, not coordinated";
  }
  return "";
}

std::vector<std::string> texts_once(std::vector<std::string> texts) {
  std::vector<std::string> out;
  for (std::string& text : texts)
    if (std::find(out.begin(), out.end(), text) == out.end()) out.push_back(std::move(text));
  return out;
}

std::string queue_text(const evaluation::LaneGroupFigures& f, Units units) {
  return length_text(f.back_of_queue_m, units) + (f.storage_m ? " of " + length_text(*f.storage_m, units) : "");
}

std::string joined_once(const std::vector<std::string>& texts) {
  std::string out;
  for (const std::string& text : texts_once(texts))
    if (!text.empty()) out += (out.empty() ? "" : " / ") + text;
  return out;
}

bool concerns_others_only(const std::string& text, const std::string& signal, const plan::Plan& plan) {
  if (mentions(text, signal)) return false;
  return std::any_of(plan.signals.begin(), plan.signals.end(), [&](const plan::Signal& other) { return other.id != signal && mentions(text, other.id); });
}

std::vector<SignalPeriod> periods_of(const std::vector<PlanWithFigures>& periods, const std::string& signal) {
  std::vector<SignalPeriod> found;
  for (const PlanWithFigures& period : periods)
    if (const plan::Signal* known = find_signal(period.plan, signal)) found.push_back({&period, known});
  return found;
}

Facts pattern_card(const SignalPeriod& pattern) {
  const plan::Signal& signal = *pattern.signal;
  const plan::Plan& plan = pattern.period->plan;
  Facts card{"card", isolated(plan.period) + ", " + schedule_text(plan), {}};
  card.facts.push_back({"Cycle length", seconds_text(signal.cycle_s) + " s", signal.running ? old_text(signal.running->cycle_s) : "", "big"});
  if (signal.cycle_s != plan.cycle_s) card.facts.push_back({"Cycle of the plan", seconds_text(plan.cycle_s) + " s", "", ""});
  if (signal.operation != plan::Operation::free) add_offsets(card, signal);
  const std::string old_sequence = signal.running && !signal.running->sequence.empty() && signal.running->sequence != sequence_text(signal) ? "was " + signal.running->sequence : "";
  card.facts.push_back({"Sequence", sequence_text(signal), old_sequence, ""});
  std::string coordinated;
  for (const std::string& id : signal.controller.coordinated) coordinated += (coordinated.empty() ? "" : ", ") + isolated(id);
  card.facts.push_back({"Coordinated", coordinated.empty() ? "none" : coordinated, "", ""});
  card.facts.push_back({"Operation", operation_text(signal.operation), ends_text(signal), ""});
  card.facts.push_back({"Highest v/c", worst_degree(pattern), "", ""});
  card.facts.push_back({"Clock", clock_text(plan, signal), "", ""});
  return card;
}

Table phase_table(const std::vector<SignalPeriod>& patterns) {
  const bool with_force_off = is_actuated(patterns);
  Table table{"phases", "Phases", {{"Phase"}, {"Serves"}, {"Ring. place", Align::centre}, {"Min green", Align::right}, {"Walk", Align::right}, {"Ped. clear", Align::right},
                                  {"Yellow", Align::right}, {"Red clear", Align::right}}, {}, {}};
  add_period_columns(table, patterns, with_force_off);
  if (table.columns.size() > 12) table.role = "phases dense";
  for (const std::string& id : groups_in_order(signals_of(patterns)))
    if (has_row(patterns, id)) table.rows.push_back(phase_row(patterns, id, with_force_off));
  table.note = "Seconds. Split = green + yellow + red clearance. \"Yields\": permissive, everything else protected.";
  if (with_force_off) table.note += " Force-off: end of green in the cycle that starts at the begin of yellow of the reference group.";
  return table;
}

Table conflict_matrix(const std::vector<SignalPeriod>& patterns) {
  Table table{"matrix", "Intergreens: green of the row ends, green of the column begins", {{"from \xE2\x86\x93  to \xE2\x86\x92"}}, {}, {}};
  const std::vector<std::string> ids = groups_in_order(signals_of(patterns));
  for (const std::string& id : ids) table.columns.push_back({isolated(id), Align::centre});
  for (const std::string& from : ids) {
    std::vector<Cell> row{Cell(isolated(from))};
    for (const std::string& to : ids) row.push_back(shown(intergreen_cell(patterns, from, to)));
    table.rows.push_back(std::move(row));
  }
  table.note = "Seconds: intergreen, then the least time beyond it in any period. An empty field: no conflict stated.";
  return table;
}

Table clearance_table(const std::vector<SignalPeriod>& patterns, Units units) {
  Table table{"", "Clearance basis", {{"Phase"}, {"Speed"}, {"Grade", Align::right}, {"Width to clear", Align::right}, {"Yellow s", Align::right}, {"Red clear s", Align::right}, {"Rests on"}}, {}, {}};
  for (const std::string& id : groups_in_order(signals_of(patterns))) {
    std::vector<std::string> seen;
    for (const SignalPeriod& pattern : patterns) {
      const plan::Group* group = group_in(pattern, id);
      if (group == nullptr || !group->clearance_basis) continue;
      std::vector<Cell> row = clearance_row(*group, units);
      std::string key;
      for (const Cell& cell : row) key += cell.text + "\n";
      if (std::find(seen.begin(), seen.end(), key) == seen.end()) table.rows.push_back(std::move(row));
      seen.push_back(key);
    }
  }
  if (!patterns.empty()) table.note = "Design standard: " + isolated(patterns.front().period->plan.standard.id) + ".";
  return table;
}

Table lane_group_table(const std::vector<SignalPeriod>& patterns, Units units) {
  Table table{"", "Lane groups", {{"Period"}, {"Lane group"}, {"Flow veh/h", Align::right}, {"Capacity veh/h", Align::right}, {"v/c", Align::right}, {"Delay s", Align::right},
                                 {"Level of service", Align::centre}, {"Stops", Align::right}, {"Back of queue"}}, {}, {}};
  for (const SignalPeriod& pattern : patterns)
    for (const auto& f : pattern.period->figures.lane_groups) {
      if (f.signal != pattern.signal->id) continue;
      table.rows.push_back({isolated(pattern.period->plan.period), isolated(f.lane_group), count_text(f.flow_vph), count_text(f.capacity_vph),
                            Cell(ratio_text(f.degree_of_saturation), "", f.degree_of_saturation > 1), seconds_text(f.delay_s), f.level_of_service, ratio_text(f.stops_per_vehicle), queue_text(f, units)});
    }
  return table;
}

List evidence_list(const std::vector<SignalPeriod>& patterns) {
  List list{"", "Why these greens", {}};
  for (const SignalPeriod& pattern : patterns) {
    const std::string name = isolated(pattern.period->plan.period) + ": ";
    if (pattern.signal->evidence) {
      const plan::Evidence& e = *pattern.signal->evidence;
      list.items.push_back(name + (e.text.empty() ? "critical groups " + joined(e.critical_groups, " + ") + ", flow ratio " + ratio_text(e.critical_flow_ratio) + ", lost time " +
                                                        seconds_text(e.critical_lost_time_s) + " s" : e.text) + "; least cycle " + seconds_text(e.minimum_cycle_s) + " s.");
    }
    for (const plan::Oversaturation& o : pattern.signal->oversaturated)
      list.items.push_back(name + "OVERSATURATED: " + isolated(o.lane_group) + " at v/c " + ratio_text(o.degree_of_saturation) + ", queue grows by " + count_text(o.queue_growth_vph) + " veh/h.");
    const auto &early = pattern.signal->freedom_early_s, &late = pattern.signal->freedom_late_s;
    if (early && late) list.items.push_back(name + "the offset may move " + seconds_text(*early) + " s earlier or " + seconds_text(*late) + " s later with every band as it is.");
  }
  return list;
}

List assumption_list(const std::vector<SignalPeriod>& patterns) {
  std::vector<std::string> texts;
  for (const SignalPeriod& pattern : patterns)
    for (const std::string& text : pattern.period->plan.assumptions)
      if (!concerns_others_only(text, pattern.signal->id, pattern.period->plan)) texts.push_back(text);
  return {"", "Assumptions", texts_once(texts)};
}

List caution_list(const std::vector<SignalPeriod>& patterns, bool of_this_signal_alone) {
  std::vector<std::string> texts = standing_cautions();
  for (const SignalPeriod& pattern : patterns) {
    if (pattern.signal->operation == plan::Operation::coordinated_actuated)
      texts.push_back("Coordinated-actuated: green may return early, the next signal then sees its platoon early. Set offsets and force-offs by the begin of yellow.");
    for (const auto& source : {pattern.period->plan.cautions, pattern.period->figures.remarks})
      for (const std::string& text : source)
        if (mentions(text, pattern.signal->id) || (!of_this_signal_alone && !concerns_others_only(text, pattern.signal->id, pattern.period->plan))) texts.push_back(text);
  }
  return {"cautions", "Cautions", texts_once(texts)};
}

List finding_list(const std::vector<SignalPeriod>& patterns) {
  std::vector<std::string> texts;
  for (const SignalPeriod& pattern : patterns)
    for (const ReviewFinding& finding : pattern.period->review.findings)
      if (finding.signal.empty() || finding.signal == pattern.signal->id) texts.push_back(isolated(pattern.period->plan.period) + ", " + finding.rule + ": " + finding.text);
  return {"", "Findings of the review", texts_once(texts)};
}

}  // namespace entrain::report
