// A corridor laid out on one line, and the lamps of its groups over time. Private to this room.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::report {

// One stop line position of a corridor, shared by both directions where both stop at that signal.
struct CorridorRow {
  std::string signal;
  double position_m = 0;    // from the first row, in the sense of the first direction
  std::optional<std::size_t> first, second;  // index into the stops of the corridor's first and second direction
};

// Rows by position. The second direction runs the other way: its stops are matched in reverse, those that the first direction does not have
// are placed between their neighbours in proportion to their own distances.
std::vector<CorridorRow> corridor_rows(const plan::Corridor& corridor);

enum class Lamp { red, green, yellow };

struct LampSpan {
  Lamp lamp = Lamp::red;
  double from_s = 0, to_s = 0;
  bool operator==(const LampSpan&) const = default;
};

// What a group shows from system time 0 to `until_s`, without gaps. Empty where its greens or the signal's cycle are missing.
std::vector<LampSpan> lamp_spans(const plan::Signal& signal, const plan::Group& group, double until_s);

// Times at which a direction's band edge passes its stops, from the first stop on: running sums of the travel times.
std::vector<double> running_times(const plan::Direction& direction);

}  // namespace entrain::report
