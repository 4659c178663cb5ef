// Which greens serve a lane group, and which arrivals meet them. Private to this room.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"
#include "traffic/platoon.hpp"

namespace entrain::evaluation {

struct LaneGroupStream {
  std::vector<std::string> groups;
  traffic::Stream stream;     // all greens that serve it, at its saturation flow
  traffic::Profile arrivals;  // in the signal's local time, vehicles a second step
  bool platooned = false;
};

// Positive, finite, at most an hour, and a whole number of seconds (the step of the profiles).
bool is_usable_cycle(double cycle_s);

class StreamTable {
 public:
  explicit StreamTable(const plan::Plan& plan);
  // Lets the arrivals at every group shape what departs into the links, until that settles or the rounds are used up.
  void couple();
  LaneGroupStream of(const plan::Signal& signal, const plan::LaneGroup& lane_group) const;
  // The cycle in which the signal is evaluated: the plan's where the signal runs at it or at its half, else its own.
  double cycle_s(const plan::Signal& signal) const;

 private:
  struct LinkArrivals {
    const plan::Link* link;
    traffic::Profile arrivals;  // in the downstream signal's local time
  };
  const plan::Signal* find(const std::string& id) const;
  traffic::Stream stream_of(const plan::Signal& signal, const plan::Group& group) const;
  traffic::Profile arrivals_of(const plan::Link& link, const plan::Signal& from, const plan::Signal& to) const;
  std::optional<traffic::Profile> inflow_of(const std::string& signal, const std::string& group) const;

  const plan::Plan& m_plan;
  std::map<std::string, const plan::Signal*> m_signals;
  bool m_coupled = false;
  std::map<std::pair<std::string, std::string>, std::vector<LinkArrivals>> m_links;  // (signal, group) -> links that end there
};

}  // namespace entrain::evaluation
