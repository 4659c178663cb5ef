// Streams to vehicle groups: dual-ring numbers where the approaches stand in two opposite pairs, groups by approach elsewhere.
#pragma once

#include "timing/streams.hpp"

namespace entrain::timing {

struct Approach {
  int leg = 0;
  std::string label;                  // NB, EB, ...
  std::vector<std::size_t> streams;
  int number = 0;                     // even phase number; 0: general
  bool split = false;                 // a protected turn shares a lane with the through movement: served alone
};

struct Grouping {
  std::vector<Approach> approaches;   // by leg
  bool is_paired = false;             // numbers follow the dual-ring pattern
  std::vector<Group> groups;          // vehicle groups with serves, ids, phase numbers and lane groups; natural order of id
  int reference_group = 0;
};

// `phase_2_label`: approach that gets phase 2; the busiest where absent (noted as an assumption).
[[nodiscard]] Result<Grouping> group_streams(const network::Signal& signal, const Streams& streams, const standards::DesignStandard& standard,
                                             const DesignRequest& request, std::vector<std::string>& assumptions);

}  // namespace entrain::timing
