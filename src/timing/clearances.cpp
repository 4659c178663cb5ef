#include "timing/clearances.hpp"

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "timing/group_times.hpp"
#include "timing/paths.hpp"
#include "timing/turn_trap.hpp"

namespace entrain::timing {
namespace {

using standards::ApproachKind;

constexpr double stop_line_set_back_m = 6;  // stop line before the kerb line where the map does not say: common practice, no source

const network::Movement& movement_of(const network::Signal& signal, const std::string& id) {
  return *std::find_if(signal.movements.begin(), signal.movements.end(), [&](const auto& m) { return m.id == id; });
}

bool is_arrow_only(const network::Signal& signal, const Group& group) {
  return std::all_of(group.serves.begin(), group.serves.end(),
                     [&](const Served& s) { return is_opposed_turn(signal, movement_of(signal, s.movement)); });
}

ApproachKind kind_of(const standards::DesignStandard& standard, const network::Leg& leg, bool arrow) {
  using network::RoadClass;
  if (arrow) return ApproachKind::left_turn;
  switch (leg.road_class) {
    case RoadClass::motorway:
    case RoadClass::trunk:
    case RoadClass::primary:
      return leg.speed_limit_mps > value_or(standard, "fast_arterial_speed_mps", 40 * mps_per_mph) + 0.01 ? ApproachKind::major_arterial_fast : ApproachKind::major_arterial;
    case RoadClass::secondary:
    case RoadClass::ramp: return ApproachKind::minor_arterial;
    default: return ApproachKind::collector;
  }
}

}  // namespace

double clearing_width_m(const network::Signal& signal, const network::Movement& movement) {
  double crossed = 0;
  for (std::size_t leg = 0; leg < signal.legs.size(); ++leg)
    if (static_cast<int>(leg) != movement.from_leg && static_cast<int>(leg) != movement.to_leg) crossed = std::max(crossed, signal.legs[leg].width_m);
  const network::Leg &from = signal.legs[static_cast<std::size_t>(movement.from_leg)], &to = signal.legs[static_cast<std::size_t>(movement.to_leg)];
  const double set_back = from.distance_to_stop_line_m > 0 ? std::max(0.0, from.distance_to_stop_line_m - crossed / 2) : stop_line_set_back_m;
  if (movement.turn == network::TurnKind::through) return set_back + crossed;
  const double widest = std::max({crossed, from.width_m, to.width_m});
  return set_back + widest * 3.14159265358979323846 / 4;  // a quarter turn about a corner, half the wider street as radius
}

namespace {

class Times {
 public:
  Times(const ClearanceInput& input, SignalDesign& design, Diagnostics& notes) : m_input(input), m_design(design), m_notes(notes) {}

  Diagnostics set() {
    for (Group& group : m_design.groups) group.kind == GroupKind::pedestrian ? set_walk(group) : set_vehicle(group);
    level_opposing();
    apply_exceptions();
    set_pedestrian_needs(m_input.standard, m_design);
    return std::move(m_errors);
  }

 private:
  using Exception = DesignRequest::Exception;

  std::string where(const Group& group) const { return "signal " + m_input.signal.id + ", group " + group.id; }
  const network::Movement& movement(const std::string& id) const { return movement_of(m_input.signal, id); }
  const network::Leg& approach_leg(const std::string& id) const { return m_input.signal.legs[static_cast<std::size_t>(movement(id).from_leg)]; }

  bool matches(const Exception& e, const Group& group) const {
    const auto serves = [&](const Served& s) { return s.movement == e.movement; };
    const bool by_group = !e.group.empty() && e.group == group.id;
    const bool by_movement = !e.movement.empty() && std::any_of(group.serves.begin(), group.serves.end(), serves);
    const bool by_crossing = !e.crossing.empty() && std::any_of(group.crossings.begin(), group.crossings.end(), [&](const std::string& c) { return is_crossing(c, e.crossing); });
    return by_group || by_movement || by_crossing || (e.group.empty() && e.movement.empty() && e.crossing.empty());
  }

  // A crossing is named by its id or by the leg it crosses.
  bool is_crossing(const std::string& id, const std::string& name) const {
    if (id == name) return true;
    const auto& all = m_input.signal.crossings;
    const auto found = std::find_if(all.begin(), all.end(), [&](const auto& c) { return c.id == id; });
    return found != all.end() && m_input.signal.legs[static_cast<std::size_t>(found->leg)].id == name;
  }

  // The leg's speed limit with the standard's margin; a turn's from a separate lane below it.
  double travelled_mps(const Served& served, bool arrow) const {
    const double limit = approach_leg(served.movement).speed_limit_mps;
    return limit + (arrow ? value_or(m_input.standard, "turn_speed_margin_mps", 0) : value_or(m_input.standard, "through_speed_margin_mps", 0));
  }
  // Approach speed for yellow: never below the standard's least. Red clearance takes the slower of the two, since slow vehicles clear late.
  double speed_mps(const Served& served, bool arrow) const {
    return std::max(travelled_mps(served, arrow), value_or(m_input.standard, "least_approach_speed_mps", 25 * mps_per_mph));
  }
  double clearing_mps(const Served& served, bool arrow) const {
    constexpr double slowest_mps = 3;
    const double travelled = std::min(travelled_mps(served, arrow), speed_mps(served, arrow));
    return std::max(slowest_mps, arrow ? std::min(travelled, value_or(m_input.standard, "turn_clearing_speed_mps", travelled)) : travelled);
  }

  void set_vehicle(Group& group) {
    const bool arrow = is_arrow_only(m_input.signal, group);
    ClearanceBasis basis;
    for (const Served& served : group.serves) {
      const network::Leg& leg = approach_leg(served.movement);
      const double speed = speed_mps(served, arrow), width = clearing_width_m(m_input.signal, movement(served.movement));
      const double clearing = clearing_mps(served, arrow);
      const standards::ChangeInterval times = standards::change_interval(m_input.standard, speed, clearing, leg.grade_in, width);
      if (times.yellow > group.yellow) group.yellow = times.yellow, basis.speed_mps = speed, basis.grade = std::clamp(leg.grade_in, -0.25, 0.25);
      if (times.red_clearance > group.red_clearance) group.red_clearance = times.red_clearance, basis.width_m = width, basis.clearing_speed_mps = clearing;
      remark_limits(group, times);
      group.minimum_green = std::max(group.minimum_green, standards::minimum_green(m_input.standard, kind_of(m_input.standard, leg, arrow)));
    }
    if (basis.clearing_speed_mps == basis.speed_mps) basis.clearing_speed_mps.reset();
    group.basis = basis;
    group.start_up_lost_s = value_or(m_input.standard, "start_up_lost_s", 2.0);
    group.end_gain_s = value_or(m_input.standard, "end_gain_s", 2.0);
  }

  void remark_limits(const Group& group, const standards::ChangeInterval& times) {
    if (times.yellow_cut)
      m_notes.push_back(warning(where(group), "the yellow equation asks for more than the standard's longest yellow: the rest was given to red clearance"));
    if (times.red_above_maximum)
      m_notes.push_back(warning(where(group), "red clearance " + number_text(times.red_clearance.seconds(), 1) + " s is above the standard's longest", "a shorter way across the intersection",
                                "Check the leg widths and speeds; the value was not cut."));
  }

  void set_walk(Group& group) {
    for (const std::string& id : group.crossings) {
      const auto& crossing = *std::find_if(m_input.signal.crossings.begin(), m_input.signal.crossings.end(), [&](const auto& c) { return c.id == id; });
      const auto& changes = m_input.request.crossing_changes;
      const auto change = changes.find(m_input.signal.legs[static_cast<std::size_t>(crossing.leg)].id);
      std::optional<double> button, speed;
      if (change != changes.end()) button = change->second.button_distance_m, speed = change->second.walking_speed_mps;
      if (speed && !(*speed > 0.1 && *speed < 3)) {
        m_errors.push_back(error(where(group) + ", crossing " + id, "a walking speed of " + number_text(*speed) + " m/s", "between 0.1 and 3 m/s", "Correct crossings.walking_speed."));
        continue;
      }
      const standards::PedestrianTimes standard = standards::pedestrian_times(m_input.standard, crossing.length_m, button, std::nullopt);
      const standards::PedestrianTimes times = speed ? standards::pedestrian_times(m_input.standard, crossing.length_m, button, speed) : standard;
      if (times.clearance < standard.clearance && !has_author(group, "pedestrian_clearance_s") && !has_author(group, "walking_speed_mps"))
        m_errors.push_back(error(where(group) + ", crossing " + id, "a walking speed of " + number_text(*speed) + " m/s that shortens the clearance to " + number_text(times.clearance.seconds(), 1) + " s",
                                 "at least the standard's " + number_text(standard.clearance.seconds(), 1) + " s", "Slow the walking speed, or give an exception for pedestrian_clearance_s with reason and author."));
      Tenths walk = times.walk;
      if (change != changes.end() && change->second.walk_s) walk = wanted_walk(group, id, *change->second.walk_s, times.walk);
      group.minimum_green = std::max(group.minimum_green, walk);
      group.clearance = std::max(group.clearance, times.clearance);
    }
  }

  Tenths wanted_walk(const Group& group, const std::string& crossing, double walk_s, Tenths standard) {
    if (!(walk_s > 0) || walk_s > 300) {
      m_errors.push_back(error(where(group) + ", crossing " + crossing, "a walk of " + number_text(walk_s) + " s", "between 0 and 300 s", "Correct crossings.walk_s."));
      return standard;
    }
    const Tenths walk = round_up_to_second(Tenths{static_cast<std::int32_t>(std::ceil(walk_s * 10 - 1e-9))});
    if (walk < standard && !has_author(group, "walk_s")) {
      m_errors.push_back(error(where(group) + ", crossing " + crossing, "a walk of " + number_text(walk_s) + " s", "at least the standard's " + number_text(standard.seconds(), 1) + " s",
                               "Lengthen crossings.walk_s, or give an exception for walk_s with reason and author."));
      return standard;
    }
    return walk;
  }

  bool has_author(const Group& group, const std::string& key) const {
    return std::any_of(m_input.request.exceptions.begin(), m_input.request.exceptions.end(),
                       [&](const Exception& e) { return e.key == key && matches(e, group) && !trim(e.reason).empty() && !trim(e.author).empty(); });
  }

  // Where a turn yields on a circular green, its green must not end before the oncoming one: both get the longer yellow and red clearance.
  void level_opposing() {
    bool changed = true;
    while (changed) {
      changed = false;
      for (const Trap& pair : possible_traps(m_design)) {
        Group &a = m_design.groups[static_cast<std::size_t>(pair.turn_group)], &b = m_design.groups[static_cast<std::size_t>(pair.opposing_group)];
        const Tenths yellow = std::max(a.yellow, b.yellow), red = std::max(a.red_clearance, b.red_clearance);
        for (Group* group : {&a, &b}) {
          if (group->yellow == yellow && group->red_clearance == red) continue;
          m_notes.push_back(note(where(*group), "yellow and red clearance raised to those of the oncoming group, so that both greens can end together"));
          group->yellow = yellow, group->red_clearance = red, changed = true;
        }
      }
    }
  }

  void apply_exceptions() {
    for (const Exception& e : m_input.request.exceptions) {
      bool used = false;
      for (Group& group : m_design.groups)
        if (matches(e, group)) used = apply(e, group) || used;
      if (!used)
        m_errors.push_back(error("signal " + m_input.signal.id + ", exception " + printable(e.key), "group \"" + printable(e.group) + "\", movement \"" + printable(e.movement) + "\", crossing \"" + printable(e.crossing) + "\"",
                                 "a group, movement or crossing of the signal that has this value", "Correct the exception."));
    }
    level_opposing();
  }

  // Returns whether the exception's key is a value of this kind of group.
  bool apply(const Exception& e, Group& group) {
    const bool walks = group.kind == GroupKind::pedestrian;
    if (e.key == "speed_mps" && !walks) return apply_speed(e, group);
    Tenths* target = nullptr;
    if (e.key == "yellow_s" && !walks) target = &group.yellow;
    if (e.key == "red_clearance_s" && !walks) target = &group.red_clearance;
    if (e.key == "minimum_green_s" && !walks) target = &group.minimum_green;
    if (e.key == "walk_s" && walks) target = &group.minimum_green;
    if (e.key == "pedestrian_clearance_s" && walks) target = &group.clearance;
    if (e.key == "walking_speed_mps") {
      if (walks) record(e, group);
      return walks;
    }
    if (!target) return false;
    const bool tenths = target == &group.yellow || target == &group.red_clearance;
    if (!(e.value >= 0) || e.value > 300 || (e.key == "yellow_s" && e.value < value_or(m_input.standard, "yellow_min_s", 3.0) - 1e-9)) {
      m_errors.push_back(error(where(group) + ", " + e.key, number_text(e.value) + " s", e.key == "yellow_s" ? "at least the standard's least yellow" : "between 0 and 300 s", "Correct the exception."));
      return true;
    }
    Tenths wanted{static_cast<std::int32_t>(std::ceil(e.value * 10 - 1e-9))};
    if (!tenths) wanted = round_up_to_second(wanted);
    take(e, group, *target, wanted);
    return true;
  }

  bool is_signed(const Exception& e) const { return !trim(e.reason).empty() && !trim(e.author).empty(); }

  void take(const Exception& e, Group& group, Tenths& target, Tenths wanted) {
    if (wanted < target && !is_signed(e)) {
      m_errors.push_back(error(where(group) + ", " + e.key, number_text(wanted.seconds(), 1) + " s without reason and author", "at least the standard's " + number_text(target.seconds(), 1) + " s",
                               "Lengthen it, or give the exception's reason and author."));
      return;
    }
    if (wanted < target)
      m_design.assumptions.push_back("group " + group.id + ": " + e.key + " " + number_text(wanted.seconds(), 1) + " s instead of the standard's " + number_text(target.seconds(), 1) + " s; " +
                                     printable(e.reason) + " (" + printable(e.author) + ")");
    target = wanted;
    record(e, group);
  }

  void record(const Exception& e, Group& group) {
    if (!group.basis) group.basis = ClearanceBasis{};
    std::string& what = group.basis->override_what;
    what += (what.empty() ? "" : ", ") + e.key;
    group.basis->override_reason = e.reason;
    group.basis->override_author = e.author;
  }

  bool apply_speed(const Exception& e, Group& group) {
    if (!(e.value > 0) || e.value > 60) {
      m_errors.push_back(error(where(group) + ", speed_mps", number_text(e.value) + " m/s", "between 0 and 60 m/s", "Correct the exception."));
      return true;
    }
    const double clearing = group.basis->clearing_speed_mps.value_or(e.value);
    const auto times = standards::change_interval(m_input.standard, e.value, std::min(clearing, e.value), group.basis->grade, group.basis->width_m);
    take(e, group, group.yellow, times.yellow);
    take(e, group, group.red_clearance, times.red_clearance);
    remark_limits(group, times);
    group.basis->speed_mps = e.value;
    return true;
  }

  const ClearanceInput& m_input;
  SignalDesign& m_design;
  Diagnostics& m_notes;
  Diagnostics m_errors;
};

}  // namespace

Diagnostics set_times(const ClearanceInput& input, SignalDesign& design, Diagnostics& notes) { return Times(input, design, notes).set(); }

void set_intergreens(const standards::DesignStandard& standard, SignalDesign& design) {
  const Tenths buffer{static_cast<std::int32_t>(std::ceil(value_or(standard, "pedestrian_buffer_s", 3.0) * 10 - 1e-9))};
  const auto after = [&](int g) {
    const Group& group = design.groups[static_cast<std::size_t>(g)];
    return group.kind == GroupKind::pedestrian ? buffer : change_time(group);
  };
  for (Conflict& conflict : design.conflicts) conflict.intergreen_ab = after(conflict.a), conflict.intergreen_ba = after(conflict.b);
}

void set_pedestrian_needs(const standards::DesignStandard& standard, SignalDesign& design) {
  const Tenths buffer{static_cast<std::int32_t>(std::ceil(value_or(standard, "pedestrian_buffer_s", 3.0) * 10 - 1e-9))};
  for (const Group& walkers : design.groups) {
    if (walkers.kind != GroupKind::pedestrian || walkers.parent < 0 || walkers.on_call) continue;
    Group& parent = design.groups[static_cast<std::size_t>(walkers.parent)];
    parent.pedestrian_need = std::max(parent.pedestrian_need, pedestrian_occupancy(walkers) + std::max(buffer, change_time(parent)));
  }
}

}  // namespace entrain::timing
