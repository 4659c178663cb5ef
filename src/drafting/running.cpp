#include "drafting/running.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "base/circle.hpp"
#include "base/number_text.hpp"

namespace entrain::drafting {
namespace {

using project::TimingRow;

std::vector<const TimingRow*> rows_of(const Inputs& inputs, const std::string& signal, std::size_t period) {
  std::vector<const TimingRow*> rows;
  for (const TimingRow& row : inputs.tables.timing)
    if (row.signal == signal && (row.period.empty() || row.period == inputs.project.periods[period].id)) rows.push_back(&row);
  return rows;
}

const std::string& id_of(const Inputs& inputs, const PlannedSignal& planned) {
  return inputs.network.signals[static_cast<std::size_t>(planned.network_signal)].id;
}

double split_of(const TimingRow& row) {
  return row.split_s ? *row.split_s : row.green_s.value_or(0) + row.yellow_s + row.red_clearance_s;
}

int group_index(const timing::SignalDesign& design, const std::string& id) {
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (design.groups[g].id == id) return static_cast<int>(g);
  return -1;
}

Diagnostic missing_timing(const std::string& signal, const std::string& period, const char* what) {
  return error(fmt::format("timing table, signal {}, period {}", signal, period), fmt::format("no row, but the signals table fixes its {}", what),
               "the timing that runs there", "Add the signal's rows to the timing table or clear the mark in the signals table");
}

void fix_splits(const Inputs& inputs, const PlannedSignal& planned, std::size_t period, int cycle_s, const std::vector<const TimingRow*>& rows,
                timing::AllocationRequest& request, Diagnostics& problems) {
  const std::string& id = id_of(inputs, planned);
  const std::string& period_id = inputs.project.periods[period].id;
  if (rows.empty()) return problems.push_back(missing_timing(id, period_id, "splits"));
  if (rows[0]->cycle_s != cycle_s)
    return problems.push_back(error(id, fmt::format("cycle {} s with splits fixed", cycle_s), fmt::format("{} s, the cycle of its running splits", number_text(rows[0]->cycle_s)),
                                    "Use that cycle, or clear splits_fixed for this signal"));
  request.fixed_splits.assign(planned.design.groups.size(), Tenths{0});
  for (const TimingRow* row : rows) {
    const int g = group_index(planned.design, row->group);
    if (g < 0) problems.push_back(error(fmt::format("{} row {}", inputs.tables.timing_source, row->row), row->group, fmt::format("a group of {}", id), "Use the group ids of the plan"));
    else request.fixed_splits[static_cast<std::size_t>(g)] = Tenths::nearest(split_of(*row));
  }
}

// The local time of a group's instant under an order; nothing if the group has no green or no such instant.
std::optional<double> instant_s(const timing::SignalDesign& design, const timing::Allocation& order, int group, const std::string& reference) {
  const auto g = static_cast<std::size_t>(group);
  if (group < 0 || order.groups[g].greens.empty()) return std::nullopt;
  const Arc& green = order.groups[g].greens.front();
  const double start = green.start.seconds(), end = start + green.duration.seconds();
  if (reference == "begin_of_green") return start;
  if (reference == "begin_of_yellow") return end;
  if (reference == "begin_of_red") return end + design.groups[g].yellow.seconds();
  if (reference != "begin_of_pedestrian_clearance") return std::nullopt;
  for (std::size_t p = 0; p < design.groups.size(); ++p)
    if (design.groups[p].parent == group && !order.groups[p].greens.empty())
      return order.groups[p].greens.front().start.seconds() + order.groups[p].greens.front().duration.seconds();
  return std::nullopt;
}

const TimingRow* offset_row(const std::vector<const TimingRow*>& rows) {
  for (const TimingRow* row : rows)
    if (row->offset_s) return row;
  return nullptr;
}

}  // namespace

Diagnostics fix_from_timing(const Inputs& inputs, const PlannedSignal& planned, std::size_t period, int cycle_s, timing::AllocationRequest& request) {
  Diagnostics problems;
  if (!planned.sequence_fixed && !planned.splits_fixed) return problems;
  const auto rows = rows_of(inputs, id_of(inputs, planned), period);
  if (planned.sequence_fixed || planned.splits_fixed) {
    for (const TimingRow* row : rows)
      if (!row->sequence.empty()) request.fixed_sequence = row->sequence;
    if (planned.sequence_fixed && request.fixed_sequence.empty())
      problems.push_back(missing_timing(id_of(inputs, planned), inputs.project.periods[period].id, "sequence"));
  }
  if (planned.splits_fixed) fix_splits(inputs, planned, period, cycle_s, rows, request, problems);
  return problems;
}

std::optional<double> running_offset_s(const Inputs& inputs, const PlannedSignal& planned, std::size_t period, const SignalGreens& greens, int order) {
  const auto rows = rows_of(inputs, id_of(inputs, planned), period);
  const TimingRow* row = offset_row(rows);
  if (row == nullptr) return std::nullopt;
  if (row->offset_reference.empty()) return *row->offset_s == 0 ? std::optional<double>(0) : std::nullopt;
  const std::string& group = row->reference_group.empty() ? planned.design.groups[static_cast<std::size_t>(planned.design.reference_group)].id : row->reference_group;
  const auto at = instant_s(planned.design, greens.orders[static_cast<std::size_t>(order)], group_index(planned.design, group), row->offset_reference);
  if (!at) return std::nullopt;
  return wrap(*row->offset_s - *at, static_cast<double>(greens.cycle_s));
}

void put_running(const Inputs& inputs, const LocalTiming& local, std::size_t period, plan::Plan& plan) {
  for (std::size_t s = 0; s < local.signals.size(); ++s) {
    const auto rows = rows_of(inputs, id_of(inputs, local.signals[s]), period);
    if (rows.empty()) continue;
    plan::Running running;
    running.cycle_s = rows[0]->cycle_s;
    for (const TimingRow* row : rows) {
      running.splits_s[row->group] += split_of(*row);
      if (!row->sequence.empty()) running.sequence = row->sequence;
    }
    const TimingRow* row = offset_row(rows);
    const std::string& reference = plan.signals[s].reference_group;
    if (row != nullptr && (row->reference_group == reference || row->reference_group.empty())) {
      for (const TimingRow* green : rows) {
        if (green->group != reference) continue;
        const double duration = green->green_s ? *green->green_s : split_of(*green) - green->yellow_s - green->red_clearance_s;
        double back = 0;
        if (row->offset_reference == "begin_of_yellow") back = duration;
        if (row->offset_reference == "begin_of_red") back = duration + green->yellow_s;
        if (row->offset_reference == "begin_of_pedestrian_clearance") back = green->walk_s.value_or(0);
        running.offset_s = wrap(*row->offset_s - back, rows[0]->cycle_s);
        break;
      }
    }
    plan.signals[s].running = std::move(running);
  }
}

}  // namespace entrain::drafting
