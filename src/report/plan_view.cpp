#include "report/plan_view.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "base/circle.hpp"
#include "base/natural_order.hpp"
#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

bool is_usable(double seconds) { return std::fabs(seconds) <= 1e7; }  // false for what is not a number
bool is_finite(const plan::Green& green) { return is_usable(green.start_s) && is_usable(green.duration_s); }

// Tenths first, so that 94.99999 does not wrap to the cycle itself.
double wrapped_s(double seconds, double cycle_s) { return wrap(Tenths::nearest(seconds), Tenths::nearest(cycle_s)).seconds(); }

double occupied_s(const plan::Group& group, const plan::Green& green) {
  return group.kind == plan::GroupKind::pedestrian ? green.duration_s + group.clearance_s : green.duration_s;
}

std::optional<CoordinatedOffset> offset_of(const plan::Signal& signal, const std::string& id) {
  const plan::Group* group = find_group(signal, id);
  if (group == nullptr || group->greens.empty() || !is_finite(group->greens.front()) || !is_usable(signal.offset_s)) return std::nullopt;
  const plan::Green& green = group->greens.front();
  return CoordinatedOffset{id, wrapped_s(signal.offset_s + green.start_s, signal.cycle_s), wrapped_s(signal.offset_s + green.start_s + green.duration_s, signal.cycle_s)};
}

bool ends_before_barrier(const plan::RingBarrier& rings, const std::string& group) {
  return std::any_of(rings.barriers_after.begin(), rings.barriers_after.end(),
                     [&](const auto& last) { return std::find(last.begin(), last.end(), group) != last.end(); });
}

std::string rings_text(const plan::RingBarrier& rings) {
  std::string text;
  for (const auto& ring : rings.rings) {
    if (!text.empty()) text += " / ";
    for (std::size_t i = 0; i < ring.size(); ++i) text += ring[i] + (i + 1 == ring.size() ? "" : ends_before_barrier(rings, ring[i]) ? " | " : " ");
  }
  return text;
}

std::string order_of_greens(const plan::Signal& signal) {
  std::vector<std::pair<double, std::string>> starts;
  for (const plan::Group& group : signal.groups)
    if (group.kind == plan::GroupKind::vehicle && !group.greens.empty() && is_finite(group.greens.front())) starts.emplace_back(group.greens.front().start_s, group.id);
  std::sort(starts.begin(), starts.end());
  std::string text;
  for (std::size_t i = 0; i < starts.size(); ++i) text += (i == 0 ? "" : starts[i].first == starts[i - 1].first ? "+" : " > ") + starts[i].second;
  return text;
}

// "EB-T" -> {"EB", "T"}
std::pair<std::string, std::string> approach_and_turn(const std::string& movement) {
  const auto dash = movement.rfind('-');
  if (dash == std::string::npos) return {"", movement};
  return {movement.substr(0, dash), movement.substr(dash + 1)};
}

std::string turns_text(const plan::Group& group, plan::RightOfWay right_of_way) {
  std::vector<std::pair<std::string, std::string>> by_approach;
  for (const plan::Served& served : group.serves) {
    if (served.right_of_way != right_of_way) continue;
    const auto [approach, turn] = approach_and_turn(served.movement);
    auto known = std::find_if(by_approach.begin(), by_approach.end(), [&a = approach](const auto& entry) { return entry.first == a; });
    if (known == by_approach.end()) by_approach.emplace_back(approach, turn);
    else known->second += "+" + turn;
  }
  std::string text;
  for (const auto& [approach, turns] : by_approach) text += (text.empty() ? "" : ", ") + isolated(approach.empty() ? turns : approach + " " + turns);
  return text;
}

bool is_word_character(char c) { return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_' || (c & 0x80) != 0; }

}  // namespace

const plan::Signal* find_signal(const plan::Plan& plan, const std::string& id) {
  const auto found = std::find_if(plan.signals.begin(), plan.signals.end(), [&](const plan::Signal& s) { return s.id == id; });
  return found == plan.signals.end() ? nullptr : &*found;
}

const plan::Group* find_group(const plan::Signal& signal, const std::string& id) {
  const auto found = std::find_if(signal.groups.begin(), signal.groups.end(), [&](const plan::Group& g) { return g.id == id; });
  return found == signal.groups.end() ? nullptr : &*found;
}

bool is_drawable_cycle(double cycle_s) { return std::isfinite(cycle_s) && cycle_s >= 1 && cycle_s <= 86400; }

std::vector<CoordinatedOffset> coordinated_offsets(const plan::Signal& signal) {
  std::vector<CoordinatedOffset> offsets;
  if (!is_drawable_cycle(signal.cycle_s)) return offsets;
  std::vector<std::string> ids{signal.reference_group};
  for (const std::string& id : signal.controller.coordinated)
    if (std::find(ids.begin(), ids.end(), id) == ids.end()) ids.push_back(id);
  for (const std::string& id : ids)
    if (const auto offset = offset_of(signal, id)) offsets.push_back(*offset);
  return offsets;
}

std::optional<double> force_off_s(const plan::Signal& signal, const plan::Group& group) {
  const plan::Group* reference = find_group(signal, signal.reference_group);
  if (reference == nullptr || reference->greens.empty() || group.greens.empty() || !is_drawable_cycle(signal.cycle_s)) return std::nullopt;
  const plan::Green &a = reference->greens.front(), &b = group.greens.front();
  if (!is_finite(a) || !is_finite(b)) return std::nullopt;
  return wrapped_s(b.start_s + b.duration_s - a.start_s - a.duration_s, signal.cycle_s);
}

std::string sequence_text(const plan::Signal& signal) {
  const auto& rings = signal.controller.ring_barrier;
  return rings && !rings->rings.empty() ? rings_text(*rings) : order_of_greens(signal);
}

std::string served_text(const plan::Group& group) {
  const std::string free = turns_text(group, plan::RightOfWay::with_protection), yielding = turns_text(group, plan::RightOfWay::permissive);
  std::string text = free;
  if (!yielding.empty()) text += (text.empty() ? "" : "; ") + yielding + " yields";
  for (const std::string& crossing : group.crossings) text += (text.empty() ? "" : ", ") + isolated(crossing);
  return text;
}

std::optional<RingPlace> ring_place(const plan::Signal& signal, const std::string& group) {
  if (!signal.controller.ring_barrier) return std::nullopt;
  const auto& rings = signal.controller.ring_barrier->rings;
  for (std::size_t r = 0; r < rings.size(); ++r)
    for (std::size_t i = 0; i < rings[r].size(); ++i)
      if (rings[r][i] == group) return RingPlace{static_cast<int>(r) + 1, static_cast<int>(i) + 1};
  return std::nullopt;
}

std::vector<const plan::Group*> pedestrians_of(const plan::Signal& signal, const std::string& group) {
  std::vector<const plan::Group*> found;
  for (const plan::Group& candidate : signal.groups)
    if (candidate.kind == plan::GroupKind::pedestrian && candidate.parent == group) found.push_back(&candidate);
  return found;
}

std::optional<double> slack_s(const plan::Signal& signal, const plan::Group& from, const plan::Group& to, double intergreen_s) {
  if (!is_drawable_cycle(signal.cycle_s)) return std::nullopt;
  std::optional<double> least;
  for (const plan::Green& a : from.greens)
    for (const plan::Green& b : to.greens) {
      if (!is_finite(a) || !is_finite(b)) continue;
      const double slack = wrapped_s(b.start_s - a.start_s, signal.cycle_s) - occupied_s(from, a) - intergreen_s;
      if (!least || slack < *least) least = slack;
    }
  return least;
}

std::vector<std::string> groups_in_order(const std::vector<const plan::Signal*>& signals) {
  std::map<std::string, int, NaturalLess> numbers;
  for (const plan::Signal* signal : signals)
    for (const plan::Group& group : signal->groups) numbers.emplace(group.id, group.phase_number.value_or(1 << 20));
  std::vector<std::string> ids;
  for (const auto& [id, number] : numbers) ids.push_back(id);
  std::stable_sort(ids.begin(), ids.end(), [&](const std::string& a, const std::string& b) { return numbers.at(a) < numbers.at(b); });
  return ids;
}

bool mentions(const std::string& text, const std::string& word) {
  if (word.empty()) return false;
  for (auto at = text.find(word); at != std::string::npos; at = text.find(word, at + 1)) {
    const auto end = at + word.size();
    if ((at == 0 || !is_word_character(text[at - 1])) && (end == text.size() || !is_word_character(text[end]))) return true;
  }
  return false;
}

}  // namespace entrain::report
