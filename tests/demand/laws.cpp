// Laws of design flows: nothing is lost, nothing is counted twice, order does not matter.
#include <rapidcheck.h>

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "crossroads.hpp"

using namespace entrain;
using namespace entrain::demand;
using namespace entrain::demand::sample;

namespace {

std::vector<project::MovementRow> any_rows() {
  std::vector<project::MovementRow> rows;
  std::size_t line = 2;
  for (const char* approach : {"NB", "EB", "SB", "WB"})
    for (const char* turn : {"L", "T", "R"}) {
      if (*rc::gen::inRange(0, 3) == 0) continue;
      project::MovementRow r = row(approach, turn, *rc::gen::inRange(0, 1500), line++);
      if (*rc::gen::inRange(0, 2) == 0) r.lane_group = std::string(approach) + "-" + (*rc::gen::inRange(0, 2) == 0 ? turn : "TR");
      if (*rc::gen::inRange(0, 2) == 0) r.peak_hour_factor = *rc::gen::inRange(50, 101) / 100.0;
      if (*rc::gen::inRange(0, 5) == 0) r.control = "yield";
      rows.push_back(r);
    }
  return rows;
}

}  // namespace

TEST_CASE("lane groups cover every movement under signal control exactly once and carry its flow") {
  CHECK(rc::check([] {
    const auto result = flows(town(), any_rows());
    RC_ASSERT(result.has_value());
    const SignalDemand& signal = result->value.signals.at(0);
    RC_ASSERT(signal.movements.size() == 12);
    std::vector<std::string> covered, controlled;
    double in_groups = 0, in_movements = 0;
    for (const LaneGroup& group : signal.lane_groups) {
      RC_ASSERT(group.lanes >= 1);
      covered.insert(covered.end(), group.movements.begin(), group.movements.end());
      in_groups += group.flow_vph;
    }
    for (const MovementFlow& flow : signal.movements) {
      if (flow.control != Control::signal) continue;
      controlled.push_back(flow.movement), in_movements += flow.flow_vph;
    }
    std::sort(covered.begin(), covered.end()), std::sort(controlled.begin(), controlled.end());
    RC_ASSERT(covered == controlled);
    RC_ASSERT(std::fabs(in_groups - in_movements) < 1e-6);
  }));
}

TEST_CASE("the order of rows changes nothing") {
  CHECK(rc::check([] {
    const auto rows = any_rows();
    auto shuffled = rows;
    std::reverse(shuffled.begin(), shuffled.end());
    const auto a = flows(town(), rows), b = flows(town(), shuffled);
    RC_ASSERT(a.has_value());
    RC_ASSERT(b.has_value());
    for (std::size_t m = 0; m < a->value.signals[0].movements.size(); ++m) {
      RC_ASSERT(a->value.signals[0].movements[m].movement == b->value.signals[0].movements[m].movement);
      RC_ASSERT(a->value.signals[0].movements[m].flow_vph == b->value.signals[0].movements[m].flow_vph);
    }
    RC_ASSERT(text_of(a->notes) == text_of(b->notes));
  }));
}

TEST_CASE("a smaller peak-hour factor never lowers a flow") {
  CHECK(rc::check([] {
    auto rows = any_rows();
    for (auto& r : rows) r.peak_hour_factor = 0.95;
    const auto before = flows(town(), rows);
    for (auto& r : rows) r.peak_hour_factor = 0.85;
    const auto after = flows(town(), rows);
    for (std::size_t m = 0; m < before->value.signals[0].movements.size(); ++m) RC_ASSERT(after->value.signals[0].movements[m].flow_vph >= before->value.signals[0].movements[m].flow_vph);
  }));
}
