// Points on a line of time whose differences must lie in one of several arcs of a circle: is there a placement?
//
// Depth-first search over which arc (and which turn of the circle) holds each difference; the chosen bounds are kept
// closed as shortest paths (Dechter, Meiri, Pearl, Artificial Intelligence 49, 1991), so a branch dies as soon as its
// bounds contradict each other. Whole ticks: exact.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/bands/ticks.hpp"

namespace entrain::bands {

struct DifferenceArc {
  Tick from = 0, length = 0;  // y_b - y_a in [from, from + length] modulo the period, closed
};

// The difference y_b - y_a lies in one of the arcs.
struct Relation {
  int a = 0, b = 0;
  Tick period = 0;
  std::vector<DifferenceArc> arcs;
};

// One of the alternatives holds, that is, all of its relations do.
struct Choice {
  std::vector<std::vector<Relation>> alternatives;
};

enum class Verdict { fits, fails, unknown };

class ArcNetwork {
 public:
  // Points 0 .. spans.size() - 1; point i lies within [0, spans[i]) after point 0. `nodes` is the work that may still
  // be done, and is counted down.
  ArcNetwork(std::vector<Tick> spans, std::vector<Choice> choices);
  Verdict search(std::int64_t& nodes);

  // After `fits`: positions relative to point 0, and the alternative taken by each choice.
  const std::vector<Tick>& positions() const { return m_positions; }
  const std::vector<int>& alternatives() const { return m_taken; }

 private:
  struct Bound {
    Tick low = 0, high = 0;
  };
  struct State {
    std::vector<Tick> distance;           // row a, column b: the largest y_b - y_a
    std::vector<int> taken;               // alternative of each choice, -1 open
    std::vector<std::vector<bool>> held;  // by choice, by relation of the alternative taken
  };
  Tick& at(State& state, int a, int b) const { return state.distance[static_cast<std::size_t>(a * m_size + b)]; }
  bool tighten(State& state, int a, int b, Bound bound) const;
  // Bounds on y_b - y_a that the relation leaves within the state's; true in `whole` if the state's bounds lie within
  // one of them.
  std::vector<Bound> candidates(State& state, const Relation& relation, bool& whole) const;
  bool any_candidate(State& state, const Relation& relation) const;
  enum class Step { done, dead, branched };
  struct Branch {
    int choice = -1, relation = -1;
    std::vector<int> alternatives;
    std::vector<Bound> bounds;
  };
  // Takes every forced decision; then `branch` holds the open decision with the fewest ways on.
  Step propagate(State& state, Branch& branch) const;
  Tick play(State& state, const Relation& relation) const;
  void sort_branch(State& state, Branch& branch) const;
  bool settle_choice(State& state, std::size_t index, Branch& branch, bool& changed) const;
  bool settle_relations(State& state, std::size_t index, Branch& branch, bool& changed) const;
  Verdict descend(State state, std::int64_t& nodes);
  void finish(State& state);

  int m_size = 0;
  std::vector<Tick> m_spans;
  std::vector<Choice> m_choices;
  std::vector<Tick> m_positions;
  std::vector<int> m_taken;
};

}  // namespace entrain::bands
