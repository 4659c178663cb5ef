#include "coordination/bands/arc_network.hpp"

#include <algorithm>

namespace entrain::bands {

ArcNetwork::ArcNetwork(std::vector<Tick> spans, std::vector<Choice> choices)
    : m_size(static_cast<int>(spans.size())), m_spans(std::move(spans)), m_choices(std::move(choices)) {}

// Adds low <= y_b - y_a <= high and closes the distances again; false if the bounds contradict each other.
bool ArcNetwork::tighten(State& state, int a, int b, Bound bound) const {
  const auto relax = [&](int from, int to, Tick length) {
    if (length >= at(state, from, to)) return true;
    if (length + at(state, to, from) < 0) return false;
    for (int i = 0; i < m_size; ++i)
      for (int j = 0; j < m_size; ++j)
        at(state, i, j) = std::min(at(state, i, j), at(state, i, from) + length + at(state, to, j));
    return true;
  };
  return relax(a, b, bound.high) && relax(b, a, -bound.low);
}

std::vector<ArcNetwork::Bound> ArcNetwork::candidates(State& state, const Relation& relation, bool& whole) const {
  const Tick low = -at(state, relation.b, relation.a), high = at(state, relation.a, relation.b);
  std::vector<Bound> found;
  whole = false;
  for (const DifferenceArc& arc : relation.arcs) {
    if (arc.length >= relation.period) {
      whole = true;
      return {{low, high}};
    }
    // The first turn whose end is not before `low`.
    Tick from = low + wrap(arc.from - low, relation.period) - relation.period;
    if (from + arc.length < low) from += relation.period;
    for (; from <= high; from += relation.period) {
      found.push_back({from, from + arc.length});
      if (from <= low && from + arc.length >= high) {
        whole = true;
        return {found.back()};
      }
    }
  }
  return found;
}

bool ArcNetwork::any_candidate(State& state, const Relation& relation) const {
  const Tick low = -at(state, relation.b, relation.a), high = at(state, relation.a, relation.b);
  return std::any_of(relation.arcs.begin(), relation.arcs.end(), [&](const DifferenceArc& arc) {
    const Tick gap = wrap(arc.from - low, relation.period);  // from low forward to the arc's start
    return gap <= high - low || gap + arc.length >= relation.period;
  });
}

// The longest stretch that one arc leaves within the state's bounds.
Tick ArcNetwork::play(State& state, const Relation& relation) const {
  bool whole = false;
  Tick longest = -1;
  const Tick low = -at(state, relation.b, relation.a), high = at(state, relation.a, relation.b);
  for (const Bound& bound : candidates(state, relation, whole))
    longest = std::max(longest, std::min(high, bound.high) - std::max(low, bound.low));
  return longest;
}

// Ways that leave most play come first: where a placement exists, they find one soonest.
void ArcNetwork::sort_branch(State& state, Branch& branch) const {
  const auto choice = static_cast<std::size_t>(branch.choice);
  std::vector<std::pair<Tick, int>> order;
  for (const int alternative : branch.alternatives) {
    Tick least = m_spans.empty() ? 0 : at(state, 0, 0) + (Tick{1} << 60);
    for (const Relation& relation : m_choices[choice].alternatives[static_cast<std::size_t>(alternative)])
      least = std::min(least, play(state, relation));
    order.push_back({-least, alternative});
  }
  std::sort(order.begin(), order.end());
  for (std::size_t i = 0; i < order.size(); ++i) branch.alternatives[i] = order[i].second;
  if (branch.bounds.empty()) return;
  const Relation& relation =
      m_choices[choice]
          .alternatives[static_cast<std::size_t>(state.taken[choice])][static_cast<std::size_t>(branch.relation)];
  const Tick low = -at(state, relation.b, relation.a), high = at(state, relation.a, relation.b);
  std::stable_sort(branch.bounds.begin(), branch.bounds.end(), [&](const Bound& a, const Bound& b) {
    return std::min(high, a.high) - std::max(low, a.low) > std::min(high, b.high) - std::max(low, b.low);
  });
}

bool ArcNetwork::settle_choice(State& state, std::size_t index, Branch& branch, bool& changed) const {
  const Choice& choice = m_choices[index];
  std::vector<int> open;
  for (std::size_t i = 0; i < choice.alternatives.size(); ++i) {
    const auto& relations = choice.alternatives[i];
    if (std::all_of(relations.begin(), relations.end(), [&](const Relation& r) { return any_candidate(state, r); }))
      open.push_back(static_cast<int>(i));
  }
  if (open.empty()) return false;
  if (open.size() == 1) {
    state.taken[index] = open.front();
    state.held[index].assign(choice.alternatives[static_cast<std::size_t>(open.front())].size(), false);
    changed = true;
  } else if (branch.choice < 0 || open.size() < std::max(branch.alternatives.size(), branch.bounds.size())) {
    branch = {static_cast<int>(index), -1, std::move(open), {}};
  }
  return true;
}

bool ArcNetwork::settle_relations(State& state, std::size_t index, Branch& branch, bool& changed) const {
  const auto& relations = m_choices[index].alternatives[static_cast<std::size_t>(state.taken[index])];
  for (std::size_t r = 0; r < relations.size(); ++r) {
    if (state.held[index][r]) continue;
    bool whole = false;
    std::vector<Bound> bounds = candidates(state, relations[r], whole);
    if (bounds.empty()) return false;
    if (bounds.size() == 1) {
      state.held[index][r] = true;
      if (!whole && !tighten(state, relations[r].a, relations[r].b, bounds.front())) return false;
      changed = true;
    } else if (branch.choice < 0 || bounds.size() < std::max(branch.alternatives.size(), branch.bounds.size())) {
      branch = {static_cast<int>(index), static_cast<int>(r), {}, std::move(bounds)};
    }
  }
  return true;
}

ArcNetwork::Step ArcNetwork::propagate(State& state, Branch& branch) const {
  for (bool changed = true; changed;) {
    changed = false;
    branch = {};
    for (std::size_t i = 0; i < m_choices.size(); ++i) {
      if (state.taken[i] < 0 && !settle_choice(state, i, branch, changed)) return Step::dead;
      if (state.taken[i] >= 0 && !settle_relations(state, i, branch, changed)) return Step::dead;
    }
  }
  return branch.choice < 0 ? Step::done : Step::branched;
}

void ArcNetwork::finish(State& state) {
  m_taken = state.taken;
  m_positions.clear();
  for (int i = 0; i < m_size; ++i)
    m_positions.push_back(-at(state, i, 0));  // the earliest placement satisfies every bound
}

Verdict ArcNetwork::descend(State state, std::int64_t& nodes) {
  if (nodes-- <= 0) return Verdict::unknown;
  Branch branch;
  switch (propagate(state, branch)) {
    case Step::dead:
      return Verdict::fails;
    case Step::done:
      finish(state);
      return Verdict::fits;
    case Step::branched:
      break;
  }
  sort_branch(state, branch);
  const auto choice = static_cast<std::size_t>(branch.choice);
  for (const int alternative : branch.alternatives) {
    State next = state;
    next.taken[choice] = alternative;
    next.held[choice].assign(m_choices[choice].alternatives[static_cast<std::size_t>(alternative)].size(), false);
    const Verdict verdict = descend(std::move(next), nodes);
    if (verdict != Verdict::fails) return verdict;
  }
  for (const Bound& bound : branch.bounds) {
    const auto index = static_cast<std::size_t>(branch.relation);
    const Relation& relation = m_choices[choice].alternatives[static_cast<std::size_t>(state.taken[choice])][index];
    State next = state;
    next.held[choice][index] = true;
    if (!tighten(next, relation.a, relation.b, bound)) continue;
    const Verdict verdict = descend(std::move(next), nodes);
    if (verdict != Verdict::fails) return verdict;
  }
  return Verdict::fails;
}

Verdict ArcNetwork::search(std::int64_t& nodes) {
  State state;
  state.distance.assign(static_cast<std::size_t>(m_size * m_size), 0);
  for (int i = 0; i < m_size; ++i)
    for (int j = 0; j < m_size; ++j)
      if (i != j) at(state, i, j) = j == 0 ? 0 : m_spans[static_cast<std::size_t>(j)] - 1;
  state.taken.assign(m_choices.size(), -1);
  state.held.resize(m_choices.size());
  return descend(std::move(state), nodes);
}

}  // namespace entrain::bands
