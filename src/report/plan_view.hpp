// Questions that sheets, diagrams and pages ask a plan. All answers stand up to plans with missing or absurd parts.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::report {

const plan::Signal* find_signal(const plan::Plan& plan, const std::string& id);
const plan::Group* find_group(const plan::Signal& signal, const std::string& id);

// Cycles from 1 s to a day can be drawn and wrapped; others can't.
bool is_drawable_cycle(double cycle_s);

// Both common references of one coordinated group, system time modulo the signal's cycle.
struct CoordinatedOffset {
  std::string group;
  double begin_of_green_s = 0, begin_of_yellow_s = 0;
};

// The reference group first, then the other coordinated ones. Empty where the cycle or the greens are missing.
std::vector<CoordinatedOffset> coordinated_offsets(const plan::Signal& signal);

// End of a group's first green in local time counted from the begin of yellow of the reference group. Nothing where either is missing.
std::optional<double> force_off_s(const plan::Signal& signal, const plan::Group& group);

// "1 2 | 3 4 / 5 6 | 7 8" for rings and barriers; "2 > 4 > 6" by begin of green otherwise.
std::string sequence_text(const plan::Signal& signal);

// "EB T, R; EB L yields": what a group serves.
std::string served_text(const plan::Group& group);

// The ring and the place in it, both from 1.
struct RingPlace {
  int ring = 0, place = 0;
};
std::optional<RingPlace> ring_place(const plan::Signal& signal, const std::string& group);

// Pedestrian groups that run with a vehicle group.
std::vector<const plan::Group*> pedestrians_of(const plan::Signal& signal, const std::string& group);

// The least time that is left beyond occupied + intergreen from any green of `from` to any green of `to` (DESIGN 4); negative: too short.
// Nothing where a green or a usable cycle is missing.
std::optional<double> slack_s(const plan::Signal& signal, const plan::Group& from, const plan::Group& to, double intergreen_s);

// Group ids in the order of phase numbers, then ids.
std::vector<std::string> groups_in_order(const std::vector<const plan::Signal*>& signals);

// True if `word` stands in `text` with no letter or digit beside it.
bool mentions(const std::string& text, const std::string& word);

}  // namespace entrain::report
