#include "timing/ring_allocation.hpp"

#include <algorithm>
#include <set>

#include "base/number_text.hpp"
#include "timing/allocation_parts.hpp"
#include "timing/group_times.hpp"
#include "timing/turn_trap.hpp"

namespace entrain::timing {
namespace {

using Rings = std::vector<std::vector<std::vector<int>>>;

const Group& group_at(const SignalDesign& design, int g) { return design.groups[static_cast<std::size_t>(g)]; }

bool is_through(const Group& group) { return group.phase_number && *group.phase_number % 2 == 0; }

std::string where_of(const SignalDesign& design) { return "signal " + design.signal; }

// One order of one list: the groups in sequence, and its word: "lead" where the odd-numbered turn goes first, "-" without a choice.
struct ListOrder {
  std::vector<int> groups;
  std::string word;
};

std::vector<ListOrder> orders_of(const SignalDesign& design, const std::vector<int>& list) {
  if (list.size() != 2 || is_through(group_at(design, list[0])) == is_through(group_at(design, list[1]))) return {{list, "-"}};
  const bool turn_first = is_through(group_at(design, list[1]));
  const int turn = turn_first ? list[0] : list[1], through = turn_first ? list[1] : list[0];
  return {{{turn, through}, "lead"}, {{through, turn}, "lag"}};
}

struct RingOrder {
  Rings rings;
  std::string order;
  int lags = 0;
};

std::string side_word(const std::vector<std::string>& words) {
  std::string text;
  for (const std::string& word : words)
    if (word != "-") text.append(text.empty() ? "" : "-").append(word);
  return text.empty() ? "-" : text;
}

// All combinations, side by side; "lead-lag" names ring 1 first, sides are parted by "|".
std::vector<RingOrder> ring_orders(const SignalDesign& design) {
  const Rings& rings = design.ring_barrier->rings;
  std::vector<RingOrder> orders{{rings, "", 0}};
  for (std::size_t side = 0; side < rings.front().size(); ++side) {
    std::vector<std::pair<RingOrder, std::vector<std::string>>> grown;
    for (const RingOrder& order : orders) grown.push_back({order, {}});
    for (std::size_t ring = 0; ring < rings.size(); ++ring) {
      std::vector<std::pair<RingOrder, std::vector<std::string>>> next;
      for (const auto& [order, words] : grown)
        for (const ListOrder& list : orders_of(design, rings[ring][side])) {
          next.push_back({order, words});
          next.back().first.rings[ring][side] = list.groups;
          next.back().first.lags += list.word == "lag";
          next.back().second.push_back(list.word);
        }
      grown = std::move(next);
    }
    orders.clear();
    for (auto& [order, words] : grown) {
      order.order.append(side > 0 ? "|" : "").append(side_word(words));
      orders.push_back(std::move(order));
    }
  }
  return orders;
}

using SplitOf = std::vector<int>;  // by group, seconds

int side_length(const Rings& rings, std::size_t side, const SplitOf& splits) {
  int longest = 0;
  for (const auto& ring : rings) {
    int length = 0;
    for (const int g : ring[side]) length += splits[static_cast<std::size_t>(g)];
    longest = std::max(longest, length);
  }
  return longest;
}

Allocation laid_out(const SignalDesign& design, const AllocationRequest& request, const RingOrder& order, const SplitOf& splits) {
  Allocation allocation;
  allocation.order = order.order;
  allocation.sequence = sequence_text(design, order.rings);
  allocation.groups.resize(design.groups.size());
  int barrier = 0;
  for (std::size_t side = 0; side < order.rings.front().size(); ++side) {
    for (const auto& ring : order.rings) {
      int start = barrier;
      for (const int g : ring[side]) {
        const Tenths split = Tenths::from_seconds(splits[static_cast<std::size_t>(g)]);
        allocation.groups[static_cast<std::size_t>(g)] = {
            {{wrap(Tenths::from_seconds(start), request.cycle), split - change_time(group_at(design, g))}}, split, 0};
        start += splits[static_cast<std::size_t>(g)];
      }
    }
    barrier += side_length(order.rings, side, splits);
  }
  rotate_to_reference(design, request.cycle, allocation);
  place_walks(design, request.cycle, allocation);
  rate(design, request, allocation);
  return allocation;
}

SplitOf by_group(const SignalDesign& design, const RingSplits& fair) {
  SplitOf splits(design.groups.size(), 0);
  const Rings& rings = design.ring_barrier->rings;
  for (std::size_t r = 0; r < rings.size(); ++r)
    for (std::size_t s = 0; s < rings[r].size(); ++s)
      for (std::size_t i = 0; i < rings[r][s].size(); ++i) splits[static_cast<std::size_t>(rings[r][s][i])] = fair.split_s[r][s][i];
  return splits;
}

Diagnostic does_not_fit(const SignalDesign& design, const AllocationRequest& request) {
  const LongestSides longest = longest_sides(design, request.flows_vph);
  return error(where_of(design), "a cycle of " + number_text(request.cycle.seconds(), 1) + " s", "enough for every minimum: " + longest.text,
               "Choose a cycle of at least " + std::to_string(longest.total_s) + " s, or shorten a crossing or a minimum.");
}

// Fixed splits as they are, or what is wrong with them.
Result<SplitOf> fixed_splits(const SignalDesign& design, const AllocationRequest& request) {
  Diagnostics found;
  SplitOf splits(design.groups.size(), 0);
  const Rings& rings = design.ring_barrier->rings;
  for (const auto& ring : rings)
    for (const auto& side : ring)
      for (const int g : side) {
        const Tenths split = request.fixed_splits[static_cast<std::size_t>(g)];
        const int least = least_split_s(group_at(design, g));
        splits[static_cast<std::size_t>(g)] = split.count / 10;
        if (!split.is_whole_second() || split < Tenths::from_seconds(least))
          found.push_back(error(where_of(design) + ", group " + group_at(design, g).id, "a fixed split of " + number_text(split.seconds(), 1) + " s",
                                "whole seconds, at least " + std::to_string(least), "Lengthen the split or free it."));
      }
  int total = 0;
  for (std::size_t side = 0; side < rings.front().size(); ++side) {
    const int length = side_length(rings, side, splits);
    total += length;
    for (const auto& ring : rings) {
      int own = 0;
      for (const int g : ring[side]) own += splits[static_cast<std::size_t>(g)];
      if (!ring[side].empty() && own != length)
        found.push_back(error(where_of(design), "fixed splits of " + std::to_string(own) + " s and " + std::to_string(length) + " s on side " + std::to_string(side + 1) + " of the barrier",
                              "rings that meet at the barrier", "Correct the splits."));
    }
  }
  if (Tenths::from_seconds(total) != request.cycle)
    found.push_back(error(where_of(design), "fixed splits that add up to " + std::to_string(total) + " s", number_text(request.cycle.seconds(), 1) + " s, the cycle",
                          "Correct the splits or choose a cycle of " + std::to_string(total) + " s."));
  if (!found.empty()) return failure(std::move(found));
  return splits;
}

Result<SplitOf> chosen_splits(const SignalDesign& design, const AllocationRequest& request) {
  if (!request.fixed_splits.empty()) return fixed_splits(design, request);
  const auto fair = fair_splits(ring_needs(design, request.flows_vph), request.cycle.count / 10);
  if (!fair) return failure(does_not_fit(design, request));
  return by_group(design, *fair);
}

std::string without_blanks(std::string_view text) {  // blanks at the ends and runs of them do not count
  std::string out;
  bool blank = false;
  for (const char c : text) {
    if (c == ' ' || c == '\t') {
      blank = true;
      continue;
    }
    const bool mark = c == '|' || c == '/';
    if (blank && !out.empty() && !mark && out.back() != '|' && out.back() != '/') out += ' ';
    out += c;
    blank = false;
  }
  return out;
}

bool is_same_sequence(const std::string& a, const std::string& b) { return without_blanks(a) == without_blanks(b); }

Diagnostic refused_sequence(const SignalDesign& design, const AllocationRequest& request, const std::vector<RingOrder>& orders) {
  std::vector<std::string> possible;
  for (const RingOrder& order : orders) possible.push_back(std::string(1, '"').append(sequence_text(design, order.rings)).append(1, '"'));
  return error(where_of(design), "the fixed sequence \"" + printable(request.fixed_sequence) + "\"", "one of its orders: " + list_of(possible),
               "Correct the sequence or free it.");
}

std::string refusal(const SignalDesign& design, const std::optional<Trap>& trap, const std::optional<Clash>& clash) {
  if (trap)
    return trap->turn + " would see its green of group " + group_at(design, trap->turn_group).id + " end while " + trap->opposing + " of group " +
           group_at(design, trap->opposing_group).id + " stays green";
  return "group " + group_at(design, clash->b).id + " would start " + number_text(clash->gap.seconds(), 1) + " s after group " +
         group_at(design, clash->a).id + " is clear, where " + number_text(clash->needed.seconds(), 1) + " s are needed";
}

}  // namespace

std::string sequence_text(const SignalDesign& design, const Rings& rings) {
  std::string text;
  for (std::size_t r = 0; r < rings.size(); ++r) {
    if (r > 0) text += " / ";
    for (std::size_t s = 0; s < rings[r].size(); ++s) {
      if (s > 0) text += "|";
      for (std::size_t i = 0; i < rings[r][s].size(); ++i) text.append(i > 0 ? " " : "").append(group_at(design, rings[r][s][i]).id);
    }
  }
  return text;
}

RingNeeds ring_needs(const SignalDesign& design, const std::vector<double>& flows_vph) {
  RingNeeds needs;
  for (const auto& ring : design.ring_barrier->rings) {
    needs.emplace_back();
    for (const auto& side : ring) {
      needs.back().emplace_back();
      for (const int g : side) {
        const Group& group = group_at(design, g);
        needs.back().back().push_back({least_split_s(group), flow_ratio(design, group, flows_vph), lost_in_split_s(group), is_through(group)});
      }
    }
  }
  return needs;
}

LongestSides longest_sides(const SignalDesign& design, const std::vector<double>& flows_vph) {
  const RingNeeds needs = ring_needs(design, flows_vph);
  const auto& rings = design.ring_barrier->rings;
  LongestSides out;
  for (std::size_t side = 0; side < rings.front().size(); ++side) {
    std::size_t longest = 0;
    int length = -1;
    for (std::size_t r = 0; r < rings.size(); ++r) {
      int own = 0;
      for (const SplitNeed& need : needs[r][side]) own += need.least_s;
      if (own > length) length = own, longest = r;
    }
    std::vector<std::string> words;
    for (std::size_t i = 0; i < rings[longest][side].size(); ++i) {
      out.groups.push_back(rings[longest][side][i]);
      words.push_back(group_at(design, rings[longest][side][i]).id + " (" + std::to_string(needs[longest][side][i].least_s) + " s)");
    }
    if (!words.empty()) out.text.append(out.text.empty() ? "" : ", then ").append(list_of(words));
    out.total_s += std::max(0, length);
  }
  out.text += " need " + std::to_string(out.total_s) + " s";
  return out;
}

Result<std::vector<Allocation>> allocate_rings(const SignalDesign& design, const AllocationRequest& request) {
  const auto splits = chosen_splits(design, request);
  if (!splits) return failure(splits.error());
  std::vector<RingOrder> orders = ring_orders(design);
  if (!request.fixed_sequence.empty()) {
    const std::vector<RingOrder> all = orders;
    std::erase_if(orders, [&](const RingOrder& order) { return !is_same_sequence(sequence_text(design, order.rings), request.fixed_sequence); });
    if (orders.empty()) return failure(refused_sequence(design, request, all));
  }
  std::stable_sort(orders.begin(), orders.end(), [](const RingOrder& a, const RingOrder& b) { return a.lags != b.lags ? a.lags < b.lags : a.order < b.order; });
  const std::vector<Trap> traps = possible_traps(design);
  std::vector<Allocation> kept;
  std::set<std::string> refusals;
  for (const RingOrder& order : orders) {
    Allocation allocation = laid_out(design, request, order, *splits);
    const auto trap = find_trap(design, traps, request.cycle, arcs_of(allocation));
    const auto clash = find_clash(design, request.cycle, allocation.groups);
    if (trap || clash)
      refusals.insert(refusal(design, trap, clash));
    else
      kept.push_back(std::move(allocation));
  }
  if (kept.empty())
    return failure(error(where_of(design), list_of({refusals.begin(), refusals.end()}), "an order that traps no turn and keeps every intergreen",
                         request.fixed_sequence.empty() ? "Protect the opposed turns, or correct the conflicts." : "Choose another sequence or protect the opposed turns."));
  return kept;
}

}  // namespace entrain::timing
