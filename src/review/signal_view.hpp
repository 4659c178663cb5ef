// One signal of a plan made easy to look at: ids resolved, lamps on a grid of tenths, own modulo. Private to the review.
#pragma once

#include <cstdint>
#include <map>
#include <string>
#include <vector>

#include "base/diagnostic.hpp"
#include "plan/plan.hpp"
#include "review/review.hpp"

namespace entrain::review {

inline constexpr double tolerance_s = 0.05;  // below the finest step of a controller
inline constexpr double longest_cycle_s = 3600;
inline constexpr double written_s = 0.002;   // what a plan's decimals may hide in a recomputed interval
// A signal beyond these is no signal: it is reported and not looked at.
inline constexpr std::size_t most_groups = 128, most_greens = 64, most_uses = 64, most_movements = 256, most_legs = 32, most_crossings = 64, most_conflicts = 20000;

// What a group's lamps show in one tenth of a second. After a pedestrian clearance the buffer still belongs to the people.
enum class Lamp : std::uint8_t { red, green, yellow, red_clearance, walk, pedestrian_clearance, buffer };

struct Span {
  int start = 0, length = 0;  // tenths, start in [0, cycle)
};

// One bit a tenth of the cycle.
class Row {
 public:
  explicit Row(int cycle = 0) : m_cycle(cycle), m_words(static_cast<std::size_t>(cycle + 63) / 64, 0) {}
  int cycle() const { return m_cycle; }
  void set(int tenth) { m_words[static_cast<std::size_t>(tenth) / 64] |= std::uint64_t{1} << (tenth % 64); }
  bool at(int tenth) const { return (m_words[static_cast<std::size_t>(tenth) / 64] >> (tenth % 64) & 1) != 0; }
  void add(const Row& other);
  std::vector<int> common(const Row& other) const;  // tenths set in both, ascending

 private:
  int m_cycle;
  std::vector<std::uint64_t> m_words;
};

// Two groups that must not run together.
struct ConflictPair {
  std::size_t a = 0, b = 0;                // a < b
  std::string why;                         // the two paths, or "listed"
  bool is_derived = false;                 // from geometry
  const plan::Conflict* listed = nullptr;  // the plan's entry
  bool swapped = false;                    // the entry names b first
};

struct SignalView {
  const plan::Plan& plan;
  const plan::Signal& signal;
  int cycle = 0;                                // tenths; 0: not usable
  bool is_usable = false;                       // within every limit, with a cycle: greens and lamps are laid out
  std::map<std::string, std::size_t> group{};   // id -> index
  std::map<std::string, std::size_t> movement{};
  std::map<std::string, std::size_t> leg{};
  std::map<std::string, std::size_t> crossing{};
  std::vector<std::vector<Span>> greens{};      // by group
  std::vector<Row> green_rows{};                // by group: green or walk
  std::vector<Row> lit_rows{};                  // by group: anything but red
  bool has_geometry = false;                    // legs and movements for every vehicle group, crossings for every pedestrian group
  std::string why_no_geometry{};
  std::vector<ConflictPair> conflicts{};        // sorted by a, b

  // What is displayed between green and red: yellow and red clearance, or pedestrian clearance; tenths.
  int after_green(std::size_t group_index) const;
  // The standard's buffer between the end of a pedestrian clearance and what may start next; tenths.
  int buffer() const;
  bool is_always_green(std::size_t group_index) const;
  double standard(const char* key, double otherwise) const;
  std::vector<Lamp> lamps(std::size_t group_index) const;  // by tenth
};

// People or bicycles on a crossing, not vehicles on a lane.
bool walks(const plan::Group& group);

// Collects findings of one signal; of the same rule at most `most_alike`, then how many more.
class Findings {
 public:
  static constexpr int most_alike = 50;
  Findings(std::vector<Finding>& list, std::string signal) : m_list(list), m_signal(std::move(signal)) {}
  ~Findings();
  Findings(const Findings&) = delete;
  Findings& operator=(const Findings&) = delete;
  void add(const char* rule, Severity severity, std::string sentence, std::string mend = {}, std::vector<std::string> groups = {});
  void violation(const char* rule, std::string sentence, std::string mend = {}, std::vector<std::string> groups = {}) {
    add(rule, Severity::violation, std::move(sentence), std::move(mend), std::move(groups));
  }

 private:
  std::vector<Finding>& m_list;
  std::string m_signal;
  std::map<std::pair<std::string, int>, int> m_count;
};

int modulo(int value, int cycle);
int to_tenths(double seconds);       // nearest; not finite: 0; clamped to +-10^8
int to_tenths_up(double seconds);    // to the next tenth, for what must not be shortened
bool is_on_tenth(double seconds);
bool is_whole(double seconds);
std::string seconds_of(int tenths);  // for people

// Resolves ids, lays out greens and lamps; reports duplicates, unknown references and numbers that are out of every range.
SignalView view_of(const plan::Plan& plan, const plan::Signal& signal, Findings& findings);

}  // namespace entrain::review
