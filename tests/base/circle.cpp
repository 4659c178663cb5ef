// Circular time against a table of single tenths.
#include "base/circle.hpp"

#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <cmath>

using namespace entrain;

namespace {

bool slow_contains(int cycle, Arc arc, int t) {
  for (int k = 0; k < arc.duration.count; ++k)
    if ((arc.start.count + k) % cycle == t) return true;
  return false;
}

Arc any_arc(int cycle) { return {{*rc::gen::inRange(0, cycle)}, {*rc::gen::inRange(0, cycle + 1)}}; }

}  // namespace

TEST_CASE("wrap gives the representative in [0, cycle)") {
  CHECK(wrap(-1, 90) == 89);
  CHECK(wrap(90, 90) == 0);
  CHECK(wrap(-180.5, 90.0) == Approx(89.5));
  CHECK(wrap(-1e-18, 90.0) == 0.0);
  CHECK_FALSE(std::signbit(wrap(-90.0, 90.0)));
  CHECK(wrap(std::int64_t{-1}, std::int64_t{1} << 40) == (std::int64_t{1} << 40) - 1);
}

TEST_CASE("membership, overlap and intersection agree with a table of tenths") {
  CHECK(rc::check([] {
    const int cycle = *rc::gen::inRange(1, 60);
    const Circle circle({cycle});
    const Arc a = any_arc(cycle), b = any_arc(cycle);
    int both = 0;
    for (int t = 0; t < cycle; ++t) {
      const bool in_a = slow_contains(cycle, a, t), in_b = slow_contains(cycle, b, t);
      RC_ASSERT(circle.contains(a, {t}) == in_a);
      both += in_a && in_b;
      bool in_parts = false;
      for (const Arc& part : circle.intersection(a, b)) in_parts = in_parts || circle.contains(part, {t});
      RC_ASSERT(in_parts == (in_a && in_b));
    }
    RC_ASSERT(circle.overlap(a, b).count == both);
    RC_ASSERT(circle.overlap(b, a).count == both);
  }));
}

TEST_CASE("tenths round to the next whole second and never down") {
  CHECK(round_up_to_second({41}).count == 50);
  CHECK(round_up_to_second({40}).count == 40);
  CHECK(Tenths::nearest(3.94).count == 39);
  CHECK(Tenths::nearest(-0.05).count == -1);
}
