#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "timing/clearances.hpp"
#include "timing/conflicts.hpp"
#include "timing/group_times.hpp"
#include "timing/grouping.hpp"
#include "timing/paths.hpp"
#include "timing/signal_design.hpp"
#include "timing/streams.hpp"

namespace entrain::timing {
namespace {

double share_of(const Streams& streams, const LaneGroup& lanes, network::TurnKind turn) {
  double all = 0, turning = 0;
  for (const Stream& stream : streams.list) {
    if (std::find(lanes.movements.begin(), lanes.movements.end(), stream.movement->id) == lanes.movements.end()) continue;
    all += stream.flow_vph;
    if (stream.movement->turn == turn) turning += stream.flow_vph;
  }
  return all > 0 ? turning / all : 0;
}

const Stream* stream_of(const Streams& streams, const std::string& movement) {
  const auto found = std::find_if(streams.list.begin(), streams.list.end(), [&](const Stream& s) { return s.movement->id == movement; });
  return found == streams.list.end() ? nullptr : &*found;
}

bool is_permissive_anywhere(const SignalDesign& design, const std::string& movement) {
  bool permissive = false, with_protection = false;
  for (const Group& group : design.groups)
    for (const Served& served : group.serves)
      if (served.movement == movement) (served.right_of_way == RightOfWay::permissive ? permissive : with_protection) = true;
  return permissive && !with_protection;
}

standards::LaneGroupConditions conditions_of(const network::Signal& signal, const Streams& streams, const SignalDesign& design, std::size_t index) {
  const LaneGroup& lanes = design.lane_groups[index];
  standards::LaneGroupConditions conditions;
  conditions.lanes = lanes.lanes;
  conditions.heavy_vehicle_pct = streams.heavy_vehicle_pct[index];
  conditions.left_share = share_of(streams, lanes, network::TurnKind::left) + share_of(streams, lanes, network::TurnKind::u_turn);
  conditions.right_share = share_of(streams, lanes, network::TurnKind::right);
  if (signal.traffic_side == TrafficSide::left) std::swap(conditions.left_share, conditions.right_share);  // the factors speak of the opposed turn as left
  bool only_left = true, only_right = true;
  for (const std::string& id : lanes.movements) {
    const Stream* stream = stream_of(streams, id);
    if (!stream) continue;
    only_left = only_left && stream->opposed_kind;
    only_right = only_right && !stream->opposed_kind && stream->movement->turn != network::TurnKind::through;
    conditions.grade = signal.legs[static_cast<std::size_t>(stream->movement->from_leg)].grade_in;
    if (stream->yields_to.empty() || !is_permissive_anywhere(design, id)) continue;
    conditions.with_protection = false;
    double flow = 0;
    std::vector<int> oncoming;
    for (const std::size_t i : stream->yields_to) {
      flow += streams.list[i].flow_vph;
      if (std::find(oncoming.begin(), oncoming.end(), streams.list[i].lane_group) == oncoming.end()) oncoming.push_back(streams.list[i].lane_group);
    }
    conditions.opposing_flow_vph = std::max(conditions.opposing_flow_vph, flow);
    int count = 0;
    for (const int i : oncoming) count += design.lane_groups[static_cast<std::size_t>(i)].lanes;
    conditions.opposing_lanes = std::max(conditions.opposing_lanes, count);
  }
  conditions.exclusive_left = only_left, conditions.exclusive_right = only_right;
  return conditions;
}

void set_saturation_flows(const network::Signal& signal, const Streams& streams, const standards::DesignStandard& standard, SignalDesign& design) {
  for (std::size_t i = 0; i < design.lane_groups.size(); ++i) {
    LaneGroup& lanes = design.lane_groups[i];
    lanes.permissive_only = !lanes.movements.empty() && std::all_of(lanes.movements.begin(), lanes.movements.end(), [&](const std::string& id) {
      const Stream* stream = stream_of(streams, id);
      return stream && !stream->yields_to.empty() && is_permissive_anywhere(design, id);
    });
    if (!streams.saturation_flow_is_given[i]) lanes.saturation_flow_vph = standards::saturation_flow_vph(standard, conditions_of(signal, streams, design, i));
  }
}

void note_uncontrolled(const network::Signal& signal, const Streams& streams, Diagnostics& notes) {
  for (const network::Movement* movement : streams.uncontrolled)
    for (const auto& crossing : signal.crossings)
      if (path_meets_crossing(*movement, crossing))
        notes.push_back(warning("signal " + signal.id + ", movement " + movement->id, "it runs without a signal over crossing " + crossing.id + ": people there rely on drivers who yield"));
}

std::vector<OpposedPair> opposed_pairs(const Streams& streams) {
  std::vector<OpposedPair> pairs;
  for (const Stream& stream : streams.list)
    for (const std::size_t i : stream.yields_to) pairs.push_back({stream.movement->id, streams.list[i].movement->id});
  return pairs;
}

void remark_structure(const DesignRequest& request, const Grouping& grouping, SignalDesign& design) {
  if (!request.ring_barrier_wanted || design.ring_barrier) return;
  const bool split = std::any_of(grouping.approaches.begin(), grouping.approaches.end(), [](const Approach& a) { return a.split; });
  design.assumptions.push_back(split ? "general signal groups: a protected turn shares a lane with its through movement, so its approach is served apart"
                                     : "general signal groups: the approaches or conflicts do not fit two rings and a barrier");
}

}  // namespace

Result<Noted<SignalDesign>> design_signal(const network::Signal& signal, const std::vector<demand::SignalDemand>& periods,
                                          const standards::DesignStandard& standard, const DesignRequest& request) {
  SignalDesign design;
  design.signal = signal.id;
  design.traffic_side = signal.traffic_side;
  auto streams = collect_streams(signal, periods, standard, design.assumptions);
  if (!streams) return failure(streams.error());
  Diagnostics notes = std::move(streams->notes);
  const Streams& movements = streams->value;
  auto grouping = group_streams(signal, movements, standard, request, design.assumptions);
  if (!grouping) return failure(grouping.error());
  design.groups = grouping->groups;
  design.reference_group = grouping->reference_group;
  design.lane_groups = movements.lane_groups;
  design.opposed = opposed_pairs(movements);

  const ConflictRules rules{signal, standard};
  Diagnostics wrong = add_pedestrian_groups(rules, request, design);
  design.conflicts = conflicting_pairs(rules, design);
  if (request.ring_barrier_wanted) design.ring_barrier = ring_barrier_from_numbers(design);
  remark_structure(request, *grouping, design);
  append(wrong, set_times({signal, movements, standard, request}, design, notes));
  if (!wrong.empty()) return failure(std::move(wrong));
  set_intergreens(standard, design);
  set_saturation_flows(signal, movements, standard, design);
  note_uncontrolled(signal, movements, notes);
  return Noted<SignalDesign>{std::move(design), std::move(notes)};
}

std::vector<double> lane_group_flows(const SignalDesign& design, const demand::SignalDemand& demand) {
  std::vector<double> flows(design.lane_groups.size(), 0);
  for (std::size_t i = 0; i < flows.size(); ++i)
    for (const demand::LaneGroup& lanes : demand.lane_groups)
      if (lanes.id == design.lane_groups[i].id) flows[i] = lanes.flow_vph;
  return flows;
}

}  // namespace entrain::timing
