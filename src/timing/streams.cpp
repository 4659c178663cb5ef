#include "timing/streams.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "base/number_text.hpp"
#include "timing/group_times.hpp"
#include "timing/paths.hpp"

namespace entrain::timing {
namespace {

using demand::TurnTreatment;

int protection(TurnTreatment treatment) {
  switch (treatment) {
    case TurnTreatment::with_protection: return 3;
    case TurnTreatment::protected_permissive: return 2;
    case TurnTreatment::permissive: return 1;
    case TurnTreatment::not_stated: return 0;
  }
  return 0;
}

const char* word_of(TurnTreatment treatment) {
  switch (treatment) {
    case TurnTreatment::with_protection: return "protected";
    case TurnTreatment::protected_permissive: return "protected_permissive";
    case TurnTreatment::permissive: return "permissive";
    case TurnTreatment::not_stated: return "not stated";
  }
  return "";
}

class Collector {
 public:
  Collector(const network::Signal& signal, const std::vector<demand::SignalDemand>& periods, const standards::DesignStandard& standard,
            std::vector<std::string>& assumptions)
      : m_signal(signal), m_periods(periods), m_standard(standard), m_assumptions(assumptions) {}

  Result<Noted<Streams>> collect() {
    check_geometry();
    if (!m_errors.empty()) return failure(std::move(m_errors));
    for (const auto& period : m_periods) add_movements(period);
    for (const auto& period : m_periods) add_lane_groups(period);
    finish_lanes();
    for (Stream& stream : m_out.list) find_oncoming(stream);
    for (Stream& stream : m_out.list) choose_treatment(stream);
    if (m_out.list.empty() && m_errors.empty() && !m_signal.pedestrian_only)
      fail("", "no movement under signal control", "at least one", "Give the signal movements, or leave it out.");
    if (!m_errors.empty()) return failure(std::move(m_errors));
    return Noted<Streams>{std::move(m_out), std::move(m_notes)};
  }

 private:
  std::string where(const std::string& part) const { return "signal " + m_signal.id + (part.empty() ? "" : ", " + part); }
  void fail(const std::string& part, std::string found, std::string expected, std::string mend) {
    Diagnostic d = error(where(part), std::move(found), std::move(expected), std::move(mend));
    if (std::find(m_errors.begin(), m_errors.end(), d) == m_errors.end()) m_errors.push_back(std::move(d));
  }

  bool is_leg(int leg) const { return leg >= 0 && leg < static_cast<int>(m_signal.legs.size()); }

  void check_geometry() {
    if (m_signal.legs.empty())
      fail("", "no legs", "legs with bearings", "Give the project roads, or a timing table and conflicts for this signal.");
    for (const auto& leg : m_signal.legs)
      if (!std::isfinite(leg.bearing_deg) || !std::isfinite(leg.width_m) || !std::isfinite(leg.speed_limit_mps) || !std::isfinite(leg.grade_in))
        fail("leg " + leg.id, "a bearing, width, speed or grade that is no number", "finite values", "Correct the road data.");
    for (const auto& movement : m_signal.movements)
      if (!is_leg(movement.from_leg) || !is_leg(movement.to_leg))
        fail("movement " + movement.id, "a leg that the signal does not have", "existing legs", "Correct the movement.");
    for (const auto& crossing : m_signal.crossings)
      if (!is_leg(crossing.leg) || !(crossing.length_m > 0) || !std::isfinite(crossing.length_m))
        fail("crossing " + crossing.id, "length " + number_text(crossing.length_m) + " m", "an existing leg and a length above zero", "Correct crossings.length_m.");
    if (m_periods.empty()) fail("", "no demand", "the demand of at least one period", "Give a period.");
  }

  const network::Movement* find_movement(const std::string& id) const {
    const auto found = std::find_if(m_signal.movements.begin(), m_signal.movements.end(), [&](const auto& m) { return m.id == id; });
    return found == m_signal.movements.end() ? nullptr : &*found;
  }
  Stream* find_stream(const std::string& id) {
    const auto found = std::find_if(m_out.list.begin(), m_out.list.end(), [&](const Stream& s) { return s.movement->id == id; });
    return found == m_out.list.end() ? nullptr : &*found;
  }

  void add_movements(const demand::SignalDemand& period) {
    for (const demand::MovementFlow& flow : period.movements) {
      const network::Movement* movement = find_movement(flow.movement);
      if (!movement) {
        fail("movement " + printable(flow.movement), "a movement the signal does not have", "one of its movements", "Correct movements.approach or movements.turn.");
        continue;
      }
      if (!(flow.flow_vph >= 0) || !std::isfinite(flow.flow_vph))
        fail("movement " + movement->id, "flow " + number_text(flow.flow_vph) + " veh/h", "a finite number of zero or more", "Correct movements.volume_vph.");
      if (flow.control == demand::Control::signal)
        add_flow(*movement, flow);
      else if (flow.control != demand::Control::prohibited && std::find(m_out.uncontrolled.begin(), m_out.uncontrolled.end(), movement) == m_out.uncontrolled.end())
        m_out.uncontrolled.push_back(movement);
    }
  }

  void add_flow(const network::Movement& movement, const demand::MovementFlow& flow) {
    Stream* stream = find_stream(movement.id);
    if (!stream) {
      m_out.list.push_back({&movement, is_opposed_turn(m_signal, movement), {}, TurnTreatment::not_stated, "", 0, -1, false});
      stream = &m_out.list.back();
    }
    stream->flow_vph = std::max(stream->flow_vph, flow.flow_vph);
    if (protection(flow.treatment) > protection(stream->treatment)) {
      if (stream->treatment != TurnTreatment::not_stated)
        m_notes.push_back(warning(where("movement " + movement.id), std::string("turn_treatment ") + word_of(stream->treatment) + " in one period and " +
                                                                      word_of(flow.treatment) + " in another: the more protective holds for all"));
      stream->treatment = flow.treatment;
    }
    if (flow.group.empty() || flow.group == stream->named_group) return;
    if (!stream->named_group.empty())
      fail("movement " + movement.id, "groups " + stream->named_group + " and " + flow.group, "one group in all periods", "Correct movements.group.");
    stream->named_group = flow.group;
  }

  std::size_t lane_group_index(const demand::LaneGroup& given) {
    auto& all = m_out.lane_groups;
    const auto found = std::find_if(all.begin(), all.end(), [&](const LaneGroup& l) { return l.id == given.id; });
    if (found != all.end()) {
      if (found->movements != given.movements)
        fail("lane group " + given.id, "other movements in one period than in another", "the same lanes in all periods", "Correct movements.lane_group.");
      found->lanes = std::min(found->lanes, given.lanes);
      return static_cast<std::size_t>(found - all.begin());
    }
    all.push_back({given.id, given.movements, given.lanes, 0, given.storage_m, false});
    m_out.lane_group_flows_vph.push_back(0);
    m_out.heavy_vehicle_pct.push_back(0);
    m_out.saturation_flow_is_given.push_back(false);
    return all.size() - 1;
  }

  void add_lane_groups(const demand::SignalDemand& period) {
    for (const demand::LaneGroup& given : period.lane_groups) {
      const std::size_t i = lane_group_index(given);
      LaneGroup& lanes = m_out.lane_groups[i];
      m_out.lane_group_flows_vph[i] = std::max(m_out.lane_group_flows_vph[i], given.flow_vph);
      m_out.heavy_vehicle_pct[i] = std::max(m_out.heavy_vehicle_pct[i], given.heavy_vehicle_pct);
      if (given.lanes < 1) fail("lane group " + given.id, std::to_string(given.lanes) + " lanes", "at least one", "Correct movements.lanes.");
      if (!(given.flow_vph >= 0) || !std::isfinite(given.flow_vph))
        fail("lane group " + given.id, "flow " + number_text(given.flow_vph) + " veh/h", "a finite number of zero or more", "Correct movements.volume_vph.");
      if (!given.saturation_flow_vph) continue;
      if (!(*given.saturation_flow_vph > 0) || !std::isfinite(*given.saturation_flow_vph)) {
        fail("lane group " + given.id, "saturation flow " + number_text(*given.saturation_flow_vph) + " veh/h", "more than zero",
             "Correct movements.saturation_flow_vph or leave it empty.");
        continue;
      }
      const bool first = !m_out.saturation_flow_is_given[i];
      lanes.saturation_flow_vph = first ? *given.saturation_flow_vph : std::min(lanes.saturation_flow_vph, *given.saturation_flow_vph);
      m_out.saturation_flow_is_given[i] = true;
    }
  }

  void finish_lanes() {
    for (std::size_t i = 0; i < m_out.lane_groups.size(); ++i)
      for (const std::string& id : m_out.lane_groups[i].movements) {
        Stream* stream = find_stream(id);
        if (!stream) continue;  // free, yield, or named in vain: reported with the movement
        if (stream->lane_group >= 0 && stream->lane_group != static_cast<int>(i))
          fail("movement " + id, "lane groups " + m_out.lane_groups[static_cast<std::size_t>(stream->lane_group)].id + " and " + m_out.lane_groups[i].id,
               "one lane group", "Correct movements.lane_group.");
        stream->lane_group = static_cast<int>(i);
      }
    for (Stream& stream : m_out.list) {
      if (stream.lane_group < 0) {
        fail("movement " + stream.movement->id, "no lane group", "one lane group", "Correct movements.lane_group.");
        continue;
      }
      const auto& mates = m_out.lane_groups[static_cast<std::size_t>(stream.lane_group)].movements;
      stream.own_lane = stream.opposed_kind && std::all_of(mates.begin(), mates.end(), [&](const std::string& id) {
        const Stream* mate = find_stream(id);
        return !mate || mate->opposed_kind;
      });
    }
  }

  void find_oncoming(Stream& stream) const {
    for (std::size_t i = 0; i < m_out.list.size(); ++i)
      if (yields_to(m_signal, *stream.movement, *m_out.list[i].movement)) stream.yields_to.push_back(i);
  }

  int oncoming_lanes(const Stream& stream) const {
    std::set<int> lane_groups;
    for (const std::size_t i : stream.yields_to) lane_groups.insert(m_out.list[i].lane_group);
    int lanes = 0;
    for (const int i : lane_groups) lanes += i < 0 ? 0 : m_out.lane_groups[static_cast<std::size_t>(i)].lanes;
    return lanes;
  }

  double fastest_mps(const Stream& stream) const {
    double speed = m_signal.legs[static_cast<std::size_t>(stream.movement->from_leg)].speed_limit_mps;
    for (const std::size_t i : stream.yields_to)
      speed = std::max(speed, m_signal.legs[static_cast<std::size_t>(m_out.list[i].movement->from_leg)].speed_limit_mps);
    return speed;
  }

  // Why the standard protects the turn where the project says nothing; empty: permissive.
  std::string reason_to_protect(const Stream& stream) const {
    const int lanes = stream.lane_group < 0 || !stream.own_lane ? 0 : m_out.lane_groups[static_cast<std::size_t>(stream.lane_group)].lanes;
    if (lanes >= value_or(m_standard, "protected_turn_lanes", 2)) return std::to_string(lanes) + " turn lanes";
    if (oncoming_lanes(stream) >= value_or(m_standard, "protected_opposing_lanes", 3)) return std::to_string(oncoming_lanes(stream)) + " opposing lanes";
    const double limit = value_or(m_standard, "protected_speed_mps", 45 * mps_per_mph);
    if (fastest_mps(stream) >= limit - 0.01) return "a speed of " + number_text(fastest_mps(stream) / mps_per_mph, 0) + " mph";
    return is_allowed(m_standard, "opposed_turn") ? "" : "a standard that allows no permissive opposed turn";
  }

  void choose_treatment(Stream& stream) {
    if (!stream.opposed_kind || stream.yields_to.empty()) return;
    const std::string id = stream.movement->id;
    if (stream.treatment == TurnTreatment::not_stated) {
      const std::string reason = reason_to_protect(stream);
      stream.treatment = reason.empty() ? TurnTreatment::permissive : TurnTreatment::with_protection;
      m_assumptions.push_back(id + ": " + (reason.empty() ? "permissive turn assumed" : "protected turn assumed because of " + reason) + " (no turn_treatment given)");
    } else if (stream.treatment != TurnTreatment::with_protection && !is_allowed(m_standard, "opposed_turn")) {
      fail("movement " + id, std::string("turn_treatment ") + word_of(stream.treatment), "protected: the standard allows no permissive opposed turn",
           "Change turn_treatment or the standard.");
    }
    if (stream.treatment == TurnTreatment::protected_permissive && !stream.own_lane) {
      stream.treatment = TurnTreatment::with_protection;
      m_notes.push_back(warning(where("movement " + id), "turn_treatment protected_permissive without a lane of its own: its approach is served apart, fully protected"));
    }
  }

  const network::Signal& m_signal;
  const std::vector<demand::SignalDemand>& m_periods;
  const standards::DesignStandard& m_standard;
  std::vector<std::string>& m_assumptions;
  Streams m_out;
  Diagnostics m_errors, m_notes;
};

}  // namespace

double value_or(const standards::DesignStandard& standard, std::string_view key, double otherwise) {
  const auto found = standard.values.find(std::string(key));
  return found == standard.values.end() ? otherwise : found->second.value;
}

bool is_allowed(const standards::DesignStandard& standard, const std::string& yield) {
  const auto found = standard.allowed.find(yield);
  return found != standard.allowed.end() && found->second;
}

Result<Noted<Streams>> collect_streams(const network::Signal& signal, const std::vector<demand::SignalDemand>& periods,
                                       const standards::DesignStandard& standard, std::vector<std::string>& assumptions) {
  return Collector(signal, periods, standard, assumptions).collect();
}

}  // namespace entrain::timing
