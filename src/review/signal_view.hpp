// One signal of a plan made easy to look at: ids resolved, greens on a grid of tenths, own modulo. Private to the review.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "base/diagnostic.hpp"

#include "plan/plan.hpp"
#include "review/review.hpp"

namespace entrain::review {

inline constexpr double tolerance_s = 0.05;      // below the finest step of a controller
inline constexpr double longest_cycle_s = 3600;

struct Span {
  int start = 0, length = 0;  // tenths, start in [0, cycle)
};

struct SignalView {
  const plan::Plan& plan;
  const plan::Signal& signal;
  int cycle = 0;                                  // tenths; 0: not usable
  std::map<std::string, std::size_t> group;       // id -> index
  std::map<std::string, std::size_t> movement;
  std::map<std::string, std::size_t> leg;
  std::map<std::string, std::size_t> crossing;
  std::vector<std::vector<Span>> greens;          // by group
  bool has_geometry = false;                      // legs and movements for every vehicle group, crossings for every pedestrian group

  // Green plus what is displayed before red: yellow and red clearance, or pedestrian clearance; tenths.
  int after_green(std::size_t group_index) const;
  double standard(const char* key, double otherwise) const;
};

// Collects findings of one signal.
class Findings {
 public:
  Findings(std::vector<Finding>& list, std::string signal) : m_list(list), m_signal(std::move(signal)) {}
  void add(const char* rule, Severity severity, std::string sentence, std::string mend = {}) {
    m_list.push_back({rule, severity, m_signal, std::move(sentence), std::move(mend)});
  }
  void violation(const char* rule, std::string sentence, std::string mend = {}) { add(rule, Severity::violation, std::move(sentence), std::move(mend)); }

 private:
  std::vector<Finding>& m_list;
  std::string m_signal;
};

int modulo(int value, int cycle);
int to_tenths(double seconds);  // nearest; clamped to +-10^8

// Resolves ids and greens; reports duplicates, unknown references and numbers that are out of every range.
SignalView view_of(const plan::Plan& plan, const plan::Signal& signal, Findings& findings);

}  // namespace entrain::review
