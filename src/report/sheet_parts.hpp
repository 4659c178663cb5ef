// The blocks of a timing sheet. Private to this room.
#pragma once

#include <set>
#include <string>
#include <vector>

#include "report/sheets.hpp"

namespace entrain::report {

// One signal in one period.
struct SignalPeriod {
  const PlanWithFigures* period = nullptr;
  const plan::Signal* signal = nullptr;
};

std::vector<SignalPeriod> periods_of(const std::vector<PlanWithFigures>& periods, const std::string& signal);

// Cycle, offsets in both references, sequence, coordinated groups, schedule, clock; old beside new.
Facts pattern_card(const SignalPeriod& pattern);
// Constants of each phase and its split in each period.
Table phase_table(const std::vector<SignalPeriod>& patterns);
Table conflict_matrix(const std::vector<SignalPeriod>& patterns);
Table clearance_table(const std::vector<SignalPeriod>& patterns, Units units);
Table lane_group_table(const std::vector<SignalPeriod>& patterns, Units units);
List evidence_list(const std::vector<SignalPeriod>& patterns);
// Assumptions that concern this signal: those that name no other one.
List assumption_list(const std::vector<SignalPeriod>& patterns);
// What every sheet says, then what the plan says of this signal; unless `of_this_signal_alone`, also what it says of no signal.
List caution_list(const std::vector<SignalPeriod>& patterns, bool of_this_signal_alone);
List finding_list(const std::vector<SignalPeriod>& patterns);

// For pages too: what is said the same way everywhere.
std::string schedule_text(const plan::Plan& plan);
const char* operation_text(plan::Operation operation);
std::string queue_text(const evaluation::LaneGroupFigures& figures, Units units);
std::vector<std::string> texts_once(std::vector<std::string> texts);

// Each text once, in order of first appearance, joined by " / ".
std::string joined_once(const std::vector<std::string>& texts);
// True if the text names a signal and this is none of them.
bool concerns_others_only(const std::string& text, const std::string& signal, const plan::Plan& plan);

}  // namespace entrain::report
